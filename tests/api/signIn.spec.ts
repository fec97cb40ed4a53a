import { eq } from 'drizzle-orm'
import { describe, expect, it } from 'vitest'
import { deactivatePersonOperation } from '#shared/contract/people'
import { endSessionOperation, listSessionsOperation, viewerOperation } from '#shared/contract/session'
import { person } from '../../server/database/schema/person'
import { signInSession } from '../../server/database/schema/session'
import { ATTEMPTS_PER_ACCOUNT } from '../../server/services/attempts'
import { Client, signedInAs, signedOut } from '../helpers/client'
import { makeClient, makePerson, makeStudyWithRoles, serverDatabase } from '../helpers/server'

const age = async (email: string, values: { lastSeenAt?: Date, createdAt?: Date }) => {
  const { db } = serverDatabase()
  const [account] = await db.select({ id: person.id }).from(person).where(eq(person.email, email))
  await db.update(signInSession).set(values).where(eq(signInSession.personId, account!.id))
}

const ago = (minutes: number) => new Date(Date.now() - minutes * 60_000)

describe('sign-in', () => {
  it('opens a session whose cookie is out of reach of scripts', async () => {
    const account = await makePerson()
    const response = await new Client().signIn(account)
    expect(response.status).toBe(200)
    const cookie = response.headers.getSetCookie().find(text => text.startsWith('next-auth.session-token='))
    expect(cookie).toMatch(/HttpOnly/)
    expect(cookie).toMatch(/SameSite=Lax/)
  })

  it('does not mind how the address is written', async () => {
    const account = await makePerson()
    const client = await signedInAs({ ...account, email: ` ${account.email.toUpperCase()} ` })
    expect((await client.call(viewerOperation)).person.email).toBe(account.email)
  })

  it('answers a wrong password and an unknown account alike', async () => {
    const account = await makePerson()
    const answers = await Promise.all([
      { email: account.email, password: 'not the password' },
      { email: 'nobody-at-all@example.org', password: account.password },
    ].map(async (given) => {
      const client = new Client()
      const response = await client.signIn(given)
      return { status: response.status, body: await response.json(), me: (await client.send(viewerOperation)).status }
    }))
    expect(answers[0]).toMatchObject({ status: 401, me: 401 })
    expect(answers[1]).toEqual(answers[0])
    expect(JSON.stringify(answers)).toContain('error=sign-in-failed')
  })

  it('refuses a form of another origin', async () => {
    const client = new Client()
    const response = await client.request('/api/auth/callback/credentials', {
      method: 'POST', body: 'email=a&password=b', headers: { 'origin': 'https://elsewhere.example', 'content-type': 'application/x-www-form-urlencoded' },
    })
    expect(response.status).toBe(403)
  })

  it('closes an account to further attempts, even to the right password, and says how long', async () => {
    const account = await makePerson()
    for (let attempt = 0; attempt < ATTEMPTS_PER_ACCOUNT; attempt++) {
      expect((await new Client().signIn({ ...account, password: 'wrong' })).status).toBe(401)
    }
    const response = await new Client().signIn(account)
    expect(response.status).toBe(429)
    expect(Number(response.headers.get('retry-after'))).toBeGreaterThan(60)
    expect(await response.text()).toContain('error=too-many-attempts')
  })

  it('starts counting afresh after a success', async () => {
    const account = await makePerson()
    for (let round = 0; round < 2; round++) {
      for (let attempt = 0; attempt < ATTEMPTS_PER_ACCOUNT - 1; attempt++) await new Client().signIn({ ...account, password: 'wrong' })
      expect((await new Client().signIn(account)).status).toBe(200)
    }
  })
})

describe('sessions', () => {
  it('tell the viewer who they are and what they hold', async () => {
    const { studyId, as } = await makeStudyWithRoles()
    const { person: self, memberships } = await as.cleared.client.call(viewerOperation)
    expect(self).toEqual({ id: as.cleared.id, name: as.cleared.name, email: as.cleared.email, installationRole: null })
    expect(memberships).toEqual([expect.objectContaining({
      studyId, roles: ['biostatistician'], cleared: true, exposed: false, blindHolds: true,
    })])
    expect((await as.administrator.client.call(viewerOperation))).toMatchObject({ person: { installationRole: 'administrator' }, memberships: [] })
    expect((await as.stranger.client.call(viewerOperation)).memberships).toEqual([])
  })

  it('end at sign-out, and a copied cookie ends with them', async () => {
    const { email, password } = await makePerson()
    const client = new Client()
    const response = await client.signIn({ email, password })
    const copied = response.headers.getSetCookie().find(text => text.startsWith('next-auth.session-token='))!.split(';')[0]!
    await client.signOut()
    expect((await client.send(viewerOperation)).status).toBe(401)
    expect((await signedOut().send(viewerOperation, { headers: { cookie: copied } })).status).toBe(401)
    const session = await signedOut().request('/api/auth/session', { headers: { cookie: copied } })
    expect(await session.json()).toEqual({})
  })

  it.each([
    ['idle for more than half an hour', { lastSeenAt: ago(31) }, 401],
    ['idle for less', { lastSeenAt: ago(29) }, 200],
    ['older than twelve hours', { createdAt: ago(12 * 60 + 1) }, 401],
    ['younger', { createdAt: ago(12 * 60 - 1) }, 200],
  ])('%s: %#', async (_, values, status) => {
    const { client, email } = await makeClient()
    await age(email, values)
    expect((await client.send(viewerOperation)).status).toBe(status)
  })

  it('are listed to their owner, who may end one from another', async () => {
    const account = await makeClient()
    const elsewhere = await signedInAs(account)
    const { sessions } = await account.client.call(listSessionsOperation)
    expect(sessions.map(({ current }) => current).sort()).toEqual([false, true])
    const other = sessions.find(({ current }) => !current)!
    await account.client.call(endSessionOperation, { params: { sessionId: other.id } })
    expect((await elsewhere.send(viewerOperation)).status).toBe(401)
    expect(await account.client.refused(endSessionOperation, { params: { sessionId: other.id } })).toMatchObject({ code: 'already-done' })
  })

  it('of somebody else look as if there were none', async () => {
    const [mine, theirs] = await Promise.all([makeClient(), makeClient()])
    const { sessions } = await theirs.client.call(listSessionsOperation)
    expect(await mine.client.refused(endSessionOperation, { params: { sessionId: sessions[0]!.id } })).toMatchObject({ status: 404 })
  })

  it('end when the account is closed, which then opens none', async () => {
    const administrator = await makeClient({ administrator: true })
    const leaving = await makeClient()
    await administrator.client.call(deactivatePersonOperation, { params: { personId: leaving.id }, body: { reason: 'Left the company.' } })
    expect((await leaving.client.send(viewerOperation)).status).toBe(401)
    expect((await new Client().signIn(leaving)).status).toBe(401)
  })
})
