import { send, setResponseHeader, setResponseStatus, type H3Error, type H3Event } from 'h3'
import { errorFacts, log } from './log'
import { problemOf } from './problem'

/** Answers an error as problem details. */
export function answerProblem(event: H3Event, error: unknown): Promise<void> {
  const { body, retryAfter, unforeseen } = problemOf(error, event.context.requestId ?? '')
  if (unforeseen) log.error({ requestId: body.requestId, ...errorFacts(error) }, 'unforeseen error')
  setResponseStatus(event, body.status)
  setResponseHeader(event, 'Content-Type', 'application/problem+json')
  if (retryAfter !== undefined) setResponseHeader(event, 'Retry-After', retryAfter)
  return send(event, JSON.stringify(body))
}

/** Nitro's error handler: what went wrong outside the handlers of operations. Pages keep Nuxt's own. */
export default function handleError(error: H3Error, event: H3Event): Promise<void> | undefined {
  return event.path.startsWith('/api/') ? answerProblem(event, error) : undefined
}
