import type { Problem, ProblemCode, ProblemDetail } from '#shared/contract/problems'

type Body = Partial<Problem>

/**
 * An answer of the interface that says no, or that did not come (`unreachable`, status 0). `statusCode` and
 * `data` carry it through Nuxt's payload, which keeps nothing else of an error.
 */
export class ApiProblem extends Error {
  readonly code: ProblemCode | 'unreachable'
  readonly status: number
  readonly errors: readonly ProblemDetail[]
  readonly requestId: string | null
  readonly statusCode: number
  readonly data: object

  constructor(status: number, body: Body | null) {
    const code = body?.code ?? (status === 0 ? 'unreachable' : 'internal')
    super(code)
    this.name = 'ApiProblem'
    this.code = code
    this.status = status
    this.errors = body?.errors ?? []
    this.requestId = body?.requestId ?? null
    this.statusCode = status
    this.data = { code, errors: this.errors, requestId: this.requestId }
  }
}

const isBody = (value: unknown): value is Body => typeof value === 'object' && value !== null && 'code' in value && typeof value.code === 'string'

/** A refusal from its HTTP status (0 when no answer came) and its body. */
export const toApiProblem = (status: number, body: unknown) => new ApiProblem(status, isBody(body) ? body : null)

/** What was thrown, as a problem: fetch errors and errors out of the payload carry status and body. */
export function asApiProblem(failure: unknown): ApiProblem {
  if (failure instanceof ApiProblem) return failure
  if (typeof failure !== 'object' || failure === null) return toApiProblem(0, null)
  const { statusCode, status, data } = failure as { statusCode?: unknown, status?: unknown, data?: unknown }
  const code = typeof statusCode === 'number' ? statusCode : typeof status === 'number' ? status : 0
  return toApiProblem(code, data)
}
