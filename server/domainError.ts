import type { ProblemCode, ProblemDetail } from '../shared/contract/problems'

/** Why an operation did not happen: a code of the closed list and findings, never a sentence. */
export class DomainError extends Error {
  /** Seconds after which trying again makes sense. */
  readonly retryAfter: number | undefined

  constructor(
    readonly code: ProblemCode,
    readonly errors: readonly ProblemDetail[] = [],
    { retryAfter, cause }: { retryAfter?: number, cause?: unknown } = {},
  ) {
    super(code, { cause })
    this.name = 'DomainError'
    this.retryAfter = retryAfter
  }
}
