import { and, eq, isNull } from 'drizzle-orm'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { beforeAll, describe, expect, it } from 'vitest'
import { createPersonOperation, deactivatePersonOperation, inviteAgainOperation, listPeopleOperation } from '#shared/contract/people'
import { acceptInvitationOperation, readInvitationOperation, viewerOperation } from '#shared/contract/session'
import type { PersonId } from '#shared/schemas/ids'
import { invitation } from '../../server/database/schema/person'
import { invitationToken } from '../../server/services/invitationToken'
import { signedInAs, signedOut } from '../helpers/client'
import { fromEnvironment } from '../helpers/database'
import { makeClient, serverDatabase, type SignedInAccount } from '../helpers/server'

const PASSWORD = 'a long enough phrase'

/** The link as the mail has it: made from the row and the server's secret. */
async function tokenFor(personId: string): Promise<string> {
  const [open] = await serverDatabase().db.select({ id: invitation.id }).from(invitation)
    .where(and(eq(invitation.personId, personId as PersonId), isNull(invitation.voidedAt)))
  const { authSecret } = JSON.parse(readFileSync(join(fromEnvironment('STIPULE_DATA_DIR'), 'secrets.json'), 'utf8')) as { authSecret: string }
  return invitationToken(authSecret, open!.id)
}

describe('people', () => {
  let administrator: SignedInAccount

  beforeAll(async () => {
    administrator = await makeClient({ administrator: true })
  })

  const create = () => administrator.client.call(createPersonOperation, {
    body: { name: 'Newly Invited', email: `new-${Date.now()}-${Math.random()}@example.org`, installationRole: null },
  })

  it('set their password by a link that works once', async () => {
    const created = await create()
    expect(created).toMatchObject({ ready: false, deactivatedAt: null })
    const token = await tokenFor(created.id)
    expect(await signedOut().call(readInvitationOperation, { body: { token } })).toMatchObject({ person: { name: 'Newly Invited', email: created.email } })
    await signedOut().call(acceptInvitationOperation, { body: { token, password: PASSWORD, self: null } })
    const client = await signedInAs({ email: created.email, password: PASSWORD })
    expect((await client.call(viewerOperation)).person.id).toBe(created.id)
    const again = await signedOut().refused(acceptInvitationOperation, { body: { token, password: 'another long phrase', self: null } })
    expect(again).toMatchObject({ status: 404, code: 'not-found' })
    const { people } = await administrator.client.call(listPeopleOperation)
    expect(people.find(({ id }) => id === created.id)).toMatchObject({ ready: true })
  })

  it('get another link, which ends the earlier one and whatever was open under the old password', async () => {
    const created = await create()
    const first = await tokenFor(created.id)
    await signedOut().call(acceptInvitationOperation, { body: { token: first, password: PASSWORD, self: null } })
    const client = await signedInAs({ email: created.email, password: PASSWORD })
    await administrator.client.call(inviteAgainOperation, { params: { personId: created.id } })
    await administrator.client.call(inviteAgainOperation, { params: { personId: created.id } })
    const [used, replaced, open] = await serverDatabase().db.select().from(invitation)
      .where(eq(invitation.personId, created.id as PersonId)).orderBy(invitation.createdAt, invitation.id)
    expect(used!.usedAt).not.toBeNull()
    expect(replaced!.voidedAt).not.toBeNull()
    expect(open!.voidedAt).toBeNull()
    const { authSecret } = JSON.parse(readFileSync(join(fromEnvironment('STIPULE_DATA_DIR'), 'secrets.json'), 'utf8')) as { authSecret: string }
    expect(await signedOut().refused(readInvitationOperation, { body: { token: invitationToken(authSecret, replaced!.id) } })).toMatchObject({ status: 404 })
    await signedOut().call(acceptInvitationOperation, { body: { token: invitationToken(authSecret, open!.id), password: 'quite another phrase', self: null } })
    expect((await client.send(viewerOperation)).status).toBe(401)
  })

  it('refuses a link that we did not make and a password that is too short', async () => {
    const created = await create()
    const token = await tokenFor(created.id)
    expect(await signedOut().refused(readInvitationOperation, { body: { token: `${token.slice(0, -2)}AA` } })).toMatchObject({ status: 404 })
    expect(await signedOut().refused(acceptInvitationOperation, { body: { token, password: 'short', self: null } }))
      .toMatchObject({ status: 422, errors: [{ pointer: '/password', code: 'password-too-short' }] })
    expect(await signedOut().refused(acceptInvitationOperation, { body: { token, password: PASSWORD, self: { name: 'Else', email: 'else@example.org' } } }))
      .toMatchObject({ status: 422, errors: [{ pointer: '/self', code: 'unknown-field' }] })
  })

  it('refuses an expired link', async () => {
    const created = await create()
    await serverDatabase().db.update(invitation).set({ expiresAt: new Date(Date.now() - 1000) }).where(eq(invitation.personId, created.id as PersonId))
    expect(await signedOut().refused(readInvitationOperation, { body: { token: await tokenFor(created.id) } })).toMatchObject({ status: 404 })
  })

  it('closes accounts, but nobody their own', async () => {
    const created = await create()
    const body = { reason: 'Left the company.' }
    const closed = await administrator.client.call(deactivatePersonOperation, { params: { personId: created.id }, body })
    expect(closed.deactivatedAt).not.toBeNull()
    expect(await administrator.client.refused(deactivatePersonOperation, { params: { personId: created.id }, body })).toMatchObject({ code: 'wrong-state' })
    expect(await administrator.client.refused(deactivatePersonOperation, { params: { personId: administrator.id }, body }))
      .toMatchObject({ status: 403, code: 'separation-of-duties', errors: [{ code: 'own-account' }] })
    expect(await administrator.client.refused(inviteAgainOperation, { params: { personId: created.id } })).toMatchObject({ code: 'wrong-state' })
    expect(await signedOut().refused(readInvitationOperation, { body: { token: await tokenFor(created.id) } })).toMatchObject({ status: 404 })
  })
})
