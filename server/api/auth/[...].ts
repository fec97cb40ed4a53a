import { NuxtAuthHandler } from '#auth'
import { PROBLEMS } from '#shared/contract/problems'

const handle = NuxtAuthHandler(authOptions())

/**
 * Sign-in, sign-out and the browser's own view of its session, by next-auth with its form token. Not declared
 * as an operation: its paths and bodies are next-auth's.
 */
export default defineEventHandler(async (event) => {
  if (changesState(event.method)) requireOwnOrigin(event)
  if (getRouterParam(event, '_') === 'session') await signedIn(event) // without a database: 503, and the cookie stays
  const context: SignInContext = { request: requestFacts(event) }
  const answer = await signInContext.run(context, () => handle(event))
  if (context.refusal) {
    setResponseStatus(event, PROBLEMS[context.refusal.code])
    if (context.refusal.retryAfter !== undefined) setResponseHeader(event, 'Retry-After', context.refusal.retryAfter)
  }
  return answer
})
