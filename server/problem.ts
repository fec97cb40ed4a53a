import { PROBLEMS, type Problem, type ProblemCode, type ProblemDetail } from '../shared/contract/problems'
import { catalogue } from '../shared/wording/catalogue'
import { isDatabaseUnavailable } from './database/failures'
import { DomainError } from './domainError'

export interface ProblemAnswer {
  readonly body: Problem
  /** Seconds for `Retry-After`. */
  readonly retryAfter: number | undefined
  /** Not foreseen: log it. */
  readonly unforeseen: boolean
}

const titles: Readonly<Record<ProblemCode, string>> = catalogue.en.problems

const BY_STATUS = new Map<number, ProblemCode>([
  [400, 'unreadable-request'], [404, 'not-found'], [405, 'method-not-allowed'], [413, 'too-large'], [415, 'unsupported-media-type'],
])

interface Reading { readonly code: ProblemCode, readonly errors?: readonly ProblemDetail[], readonly retryAfter?: number }

/** The status that h3 gives its own errors (unreadable body, unknown path). */
const h3Status = (error: unknown): number | undefined =>
  error instanceof Error && 'statusCode' in error && !('unhandled' in error && error.unhandled) ? Number(error.statusCode) : undefined

/** What h3 wraps: the error that was thrown first. */
const thrown = (error: unknown): unknown =>
  error instanceof Error && !(error instanceof DomainError) && error.cause instanceof DomainError ? error.cause : error

function read(given: unknown): Reading {
  const error = thrown(given)
  if (error instanceof DomainError) return error
  if (isDatabaseUnavailable(error)) return { code: 'database-unavailable', retryAfter: 5 }
  return { code: BY_STATUS.get(h3Status(error) ?? 500) ?? 'internal' }
}

/** Any error as the problem details (RFC 9457) that answer it; a foreign error gives away nothing. */
export function problemOf(error: unknown, requestId: string): ProblemAnswer {
  const { code, errors = [], retryAfter = code === 'database-unavailable' ? 5 : undefined } = read(error)
  return {
    body: { type: `/problems/${code}`, title: titles[code], status: PROBLEMS[code], code, requestId, errors },
    retryAfter,
    unforeseen: code === 'internal',
  }
}
