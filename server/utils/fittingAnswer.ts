import { isMedia, type Operation } from '#shared/contract/operation'
import { DomainError } from '../domainError'
import { log } from '../log'

/**
 * Serialises what a service gave and checks it against the operation's answer; what does not fit is never
 * sent. Files and streams pass as they are.
 *
 * @returns null where the operation answers nothing.
 * @throws {DomainError} `internal`; the log names the places, not the values.
 */
export function fittingAnswer({ id, answer }: Pick<Operation, 'id' | 'answer'>, given: unknown): unknown {
  if (answer === null) return null
  if (isMedia(answer)) return given
  const parsed = answer.safeParse(given === undefined ? undefined : JSON.parse(JSON.stringify(given)))
  if (parsed.success) return parsed.data
  log.error({ operation: id, places: parsed.error.issues.map(issue => `${issue.path.join('.')}: ${issue.code}`) }, 'answer does not fit')
  throw new DomainError('internal')
}
