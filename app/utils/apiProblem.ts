import type { Problem, ProblemCode, ProblemDetail } from '#shared/contract/problems'

/** An answer of the interface that says no, or that did not come. */
export class ApiProblem extends Error {
  readonly code: ProblemCode | 'unreachable'
  readonly status: number
  readonly errors: readonly ProblemDetail[]
  readonly requestId: string | null

  constructor(status: number, body: Partial<Problem> | null) {
    const code = body?.code ?? (status === 0 ? 'unreachable' : 'internal')
    super(code)
    this.name = 'ApiProblem'
    this.code = code
    this.status = status
    this.errors = body?.errors ?? []
    this.requestId = body?.requestId ?? null
  }
}

const isBody = (value: unknown): value is Partial<Problem> => typeof value === 'object' && value !== null && 'code' in value && typeof value.code === 'string'

export const toApiProblem = (status: number, body: unknown) => new ApiProblem(status, isBody(body) ? body : null)

/** What was thrown, as a problem: fetch errors carry status and body, on the server inside `cause` or `data`. */
export function asApiProblem(failure: unknown): ApiProblem {
  if (failure instanceof ApiProblem) return failure
  if (typeof failure !== 'object' || failure === null) return toApiProblem(0, null)
  const { statusCode, status, data } = failure as { statusCode?: unknown, status?: unknown, data?: unknown }
  const code = typeof statusCode === 'number' ? statusCode : typeof status === 'number' ? status : 0
  return toApiProblem(code, isBody(data) ? data : (data as { data?: unknown } | undefined)?.data)
}
