import { createHmac, timingSafeEqual } from 'node:crypto'
import { invitationId as invitationIdSchema, type InvitationId } from '../../shared/schemas/ids'

const codeOf = (secret: string, id: InvitationId) => createHmac('sha256', secret).update(`invitation:${id}`).digest()

/** The secret part of a link: the invitation's id and a code that only a holder of the server's secret can make. */
export const invitationToken = (secret: string, id: InvitationId) => `${id}.${codeOf(secret, id).toString('base64url')}`

/** Address at which an invitation is taken up. */
export const invitationLink = (origin: string, secret: string, id: InvitationId) => `${origin}/invitation/${invitationToken(secret, id)}`

/** @returns the invitation that a token stands for, or null when we did not make it. */
export function readInvitationToken(secret: string, token: string): InvitationId | null {
  const [idText, code, ...rest] = token.split('.')
  const id = invitationIdSchema.safeParse(idText)
  if (!id.success || code === undefined || rest.length > 0) return null
  const given = Buffer.from(code, 'base64url')
  const expected = codeOf(secret, id.data)
  return given.length === expected.length && timingSafeEqual(given, expected) ? id.data : null
}
