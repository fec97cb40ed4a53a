import type { H3Event } from 'h3'
import { getToken } from '#auth'
import { config } from '../config'
import { database } from '../database/client'
import { sessionId as sessionIdSchema } from '#shared/schemas/ids'
import { useSession, type SignedIn } from '../services/sessions'

/** The session that the request's cookie points at, when its row allows it; the cookie alone is never believed. */
export async function signedIn(event: H3Event): Promise<SignedIn | null> {
  const token = await getToken({ event, secret: config().secrets.authSecret })
  const sid = sessionIdSchema.safeParse(token?.sid)
  return sid.success ? useSession(database(), sid.data) : null
}
