/**
 * The closed list of problem codes with the HTTP status each is answered with (RFC 9457; docs/errors.md).
 * Texts stand in the wording catalogue under `problems.<code>`.
 */
export const PROBLEMS = {
  'unreadable-request': 400,
  'not-signed-in': 401,
  'sign-in-failed': 401,
  'signature-refused': 403,
  'not-permitted': 403,
  'foreign-origin': 403,
  'exposed': 403,
  'separation-of-duties': 403,
  'not-found': 404,
  'method-not-allowed': 405,
  'revision-changed': 409,
  'wrong-state': 409,
  'already-done': 409,
  'plan-not-signed': 409,
  'allocation-exists': 409,
  'look-not-open': 409,
  'queries-open': 409,
  'too-large': 413,
  'unsupported-media-type': 415,
  'invalid-input': 422,
  'plan-invalid': 422,
  'plan-incomplete': 422,
  'file-refused': 422,
  'treatment-column': 422,
  'revision-missing': 428,
  'too-many-attempts': 429,
  'internal': 500,
  'database-unavailable': 503,
} as const

export type ProblemCode = keyof typeof PROBLEMS

/** One finding about the input: where (JSON pointer, or row and column of a file), what, and its figures. */
export interface ProblemDetail {
  readonly pointer?: string
  readonly row?: number
  readonly column?: string
  readonly code: string
  readonly params?: Readonly<Record<string, string | number | readonly string[]>>
}

/** The body of every error answer, `application/problem+json`. */
export interface Problem {
  readonly type: string
  readonly title: string
  readonly status: number
  readonly code: ProblemCode
  readonly requestId: string
  readonly errors: readonly ProblemDetail[]
}
