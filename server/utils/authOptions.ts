import Imported from 'next-auth/providers/credentials'
import type { AuthOptions } from 'next-auth'
import { z } from 'zod'
import { sessionId as sessionIdSchema } from '#shared/schemas/ids'
import { config } from '../config'
import { database } from '../database/client'
import { isDatabaseUnavailable } from '../database/failures'
import { DomainError } from '../domainError'
import { errorFacts, log } from '../log'
import { signOut, useSession } from '../services/sessions'
import { signIn } from '../services/signIn'
import { signInContext } from './signInContext'

// next-auth is CommonJS: the development server sees its namespace, the built one its default export.
const CredentialsProvider = (Imported as typeof Imported & { default?: typeof Imported }).default ?? Imported

const credentials = z.object({ email: z.string().min(1).max(254), password: z.string().min(1).max(200) })

/** The refusal of a sign-in; a foreign error is logged and stands as a refusal without its text. */
function refusalOf(error: unknown): DomainError {
  if (error instanceof DomainError) return error
  if (isDatabaseUnavailable(error)) return new DomainError('database-unavailable', [], { retryAfter: 5 })
  log.error(errorFacts(error), 'sign-in failed unforeseen')
  return new DomainError('internal')
}

/** next-auth puts the message of what is thrown here into a redirect address: it is always a bare code. */
async function authorize(given: Record<'email' | 'password', string> | undefined) {
  const context = signInContext.getStore()
  try {
    const parsed = credentials.safeParse(given)
    if (!context || !parsed.success) throw new DomainError('sign-in-failed')
    const { sessionId, personId } = await signIn(database(), { ...parsed.data, request: context.request })
    return { id: personId, sid: sessionId }
  }
  catch (error) {
    const refused = refusalOf(error)
    if (context) context.refusal = refused
    throw new Error(refused.code)
  }
}

async function endSession(sid: unknown): Promise<void> {
  const id = sessionIdSchema.safeParse(sid)
  const context = signInContext.getStore()
  if (id.success && context) await signOut(database(), { sessionId: id.data, request: context.request })
}

/** Sign-in by identifier and password; the token holds nothing but the id of the session's row. */
export const authOptions = (): AuthOptions => ({
  secret: config().secrets.authSecret,
  pages: { signIn: '/login', error: '/login' },
  session: { strategy: 'jwt', maxAge: 12 * 60 * 60 },
  providers: [CredentialsProvider({ credentials: { email: {}, password: {} }, authorize })],
  callbacks: {
    async jwt({ token, user }) {
      if (user) return { sid: user.sid }
      const sid = sessionIdSchema.safeParse(token.sid)
      const session = sid.success ? await useSession(database(), sid.data) : null
      if (!session) throw new Error('session ended') // makes next-auth delete the cookie
      return { sid: session.sessionId, name: session.person.name }
    },
    session: ({ session, token }) => ({ ...session, user: { name: token.name ?? '' } }),
  },
  events: { signOut: ({ token }) => endSession(token?.sid) },
  logger: {
    error: (code) => { if (code !== 'JWT_SESSION_ERROR') log.error({ code }, 'next-auth') },
    warn: code => log.warn({ code }, 'next-auth'),
    debug: () => {},
  },
})
