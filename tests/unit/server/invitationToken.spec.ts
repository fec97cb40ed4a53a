import { describe, expect, it } from 'vitest'
import { newId } from '../../../server/database/newId'
import { invitationLink, invitationToken, readInvitationToken } from '../../../server/services/invitationToken'
import type { InvitationId } from '#shared/schemas/ids'

const secret = 'a secret of more than thirty-two characters'

describe('invitation token', () => {
  const id = newId<InvitationId>()
  const token = invitationToken(secret, id)

  it('leads back to its invitation', () => {
    expect(readInvitationToken(secret, token)).toBe(id)
    expect(invitationLink('https://stipule.example', secret, id)).toBe(`https://stipule.example/invitation/${token}`)
  })

  it('is worth nothing under another secret or for another invitation', () => {
    expect(readInvitationToken(`${secret}!`, token)).toBeNull()
    const [, code] = token.split('.')
    expect(readInvitationToken(secret, `${newId()}.${code}`)).toBeNull()
  })

  it.each(['', '.', id, `${id}.`, `${token}x`, `${token}.x`, token.slice(1), `${id}.${'A'.repeat(43)}`])('refuses %j', (text) => {
    expect(readInvitationToken(secret, text)).toBeNull()
  })
})
