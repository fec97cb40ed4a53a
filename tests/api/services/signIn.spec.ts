import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { hash } from '@node-rs/argon2'
import { eq } from 'drizzle-orm'
import type { InvitationId, PersonId, SessionId } from '#shared/schemas/ids'
import { newId } from '../../../server/database/newId'
import { invitation, person } from '../../../server/database/schema/person'
import { signInSession } from '../../../server/database/schema/session'
import { ATTEMPTS_PER_ACCOUNT, countAttempt, forgiveAttempt } from '../../../server/services/attempts'
import { firstAdministratorLink } from '../../../server/services/invitations'
import { readInvitationToken } from '../../../server/services/invitationToken'
import { hashPassword, verifyPassword } from '../../../server/services/passwords'
import { openSession, useSession } from '../../../server/services/sessions'
import { servingRoleFault } from '../../../server/database/servingRole'
import { openDatabase } from '../../../server/database/client'
import { freshDatabase, type TestDatabase } from '../../helpers/database'

let database: TestDatabase

beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

async function account(): Promise<PersonId> {
  const id = newId<PersonId>()
  await database.db.insert(person).values({ id, name: 'Test Person', email: `${id}@example.org`, passwordHash: 'x' })
  return id
}

describe('passwords', () => {
  it('are kept as argon2id with at least 19 MiB and two passes', async () => {
    const stored = await hashPassword('a long enough phrase')
    expect(stored).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/)
    expect(await verifyPassword(stored, 'a long enough phrase')).toBe(true)
    expect(await verifyPassword(stored, 'a long enough phrasf')).toBe(false)
    expect(await hashPassword('a long enough phrase')).not.toBe(stored)
  })

  it('cost the same work for an account that there is not', async () => {
    const stored = await hash('x', { memoryCost: 19_456, timeCost: 2, parallelism: 1 })
    const time = async (given: string | null) => {
      const started = performance.now()
      for (let round = 0; round < 5; round++) await verifyPassword(given, 'wrong')
      return performance.now() - started
    }
    await time(null)
    const [known, unknown] = [await time(stored), await time(null)]
    expect(unknown / known).toBeGreaterThan(0.4)
    expect(unknown / known).toBeLessThan(2.5)
  })

  it('never match without a stored hash', async () => {
    expect(await verifyPassword(null, '')).toBe(false)
  })
})

describe('attempts', () => {
  const attempt = (name: string, origin = '192.0.2.1') => ({ kind: 'signature', account: name, origin }) as const

  it('in parallel are counted one by one', async () => {
    const results = await Promise.allSettled(Array.from({ length: 30 }, () => countAttempt(database.db, attempt('parallel'))))
    expect(results.filter(({ status }) => status === 'fulfilled')).toHaveLength(ATTEMPTS_PER_ACCOUNT)
    const refused = results.find(result => result.status === 'rejected')
    expect(refused).toMatchObject({ reason: { code: 'too-many-attempts' } })
  })

  it('of one kind or account do not count for another', async () => {
    for (let round = 0; round < ATTEMPTS_PER_ACCOUNT; round++) await countAttempt(database.db, attempt('one', '192.0.2.2'))
    await expect(countAttempt(database.db, attempt('one', '192.0.2.2'))).rejects.toMatchObject({ code: 'too-many-attempts' })
    await countAttempt(database.db, attempt('two', '192.0.2.2'))
    await countAttempt(database.db, { ...attempt('one', '192.0.2.2'), kind: 'sign-in' })
  })

  it('are forgiven by a success, and an address is held to a limit over all accounts', async () => {
    const succeed = async (name: string) => {
      await countAttempt(database.db, attempt(name, '192.0.2.3'))
      await forgiveAttempt(database.db, attempt(name, '192.0.2.3'))
    }
    for (let round = 0; round < 150; round++) await succeed('steady')
    const spread = await Promise.allSettled(Array.from({ length: 120 }, (_, index) => countAttempt(database.db, attempt(`many-${index}`, '192.0.2.3'))))
    expect(spread.filter(({ status }) => status === 'fulfilled')).toHaveLength(100)
  })
})

describe('sessions', () => {
  const open = async () => {
    const personId = await account()
    return database.db.transaction(tx => openSession(tx, { personId, origin: '192.0.2.9' }))
  }
  const row = async (id: SessionId) => (await database.db.select().from(signInSession).where(eq(signInSession.id, id)))[0]!
  const ago = (minutes: number) => new Date(Date.now() - minutes * 60_000)

  it.each([
    ['idle', { lastSeenAt: ago(31) }],
    ['too-old', { createdAt: ago(721) }],
  ])('that are %s are marked so and stay refused', async (why, values) => {
    const id = await open()
    await database.db.update(signInSession).set(values).where(eq(signInSession.id, id))
    expect(await useSession(database.db, id)).toBeNull()
    expect(await row(id)).toMatchObject({ endedWhy: why })
    await database.db.update(signInSession).set({ lastSeenAt: new Date(), createdAt: new Date() }).where(eq(signInSession.id, id))
    expect(await useSession(database.db, id)).toBeNull()
  })

  it('are noted as seen at most once a minute', async () => {
    const id = await open()
    const fresh = ago(0.5)
    await database.db.update(signInSession).set({ lastSeenAt: fresh }).where(eq(signInSession.id, id))
    await useSession(database.db, id)
    expect((await row(id)).lastSeenAt).toEqual(fresh)
    await database.db.update(signInSession).set({ lastSeenAt: ago(2) }).where(eq(signInSession.id, id))
    await useSession(database.db, id)
    expect((await row(id)).lastSeenAt.getTime()).toBeGreaterThan(ago(0.5).getTime())
  })

  it('that nobody opened are none', async () => {
    expect(await useSession(database.db, newId<SessionId>())).toBeNull()
  })
})

describe('the first administrator', () => {
  const secrets = { origin: 'https://stipule.example', authSecret: 'a secret of more than thirty-two characters' }
  const idOf = (link: string | null) => readInvitationToken(secrets.authSecret, link!.split('/').at(-1)!)!
  const stored = async (id: InvitationId) => (await database.db.select().from(invitation).where(eq(invitation.id, id)))[0]!

  it('gets a link valid for an hour; a later one replaces it, and none is made once there is one', async () => {
    const first = await firstAdministratorLink(database.db, secrets)
    expect(first).toMatch(/^https:\/\/stipule\.example\/invitation\//)
    const { createdAt, expiresAt, personId } = await stored(idOf(first))
    expect(personId).toBeNull()
    expect(expiresAt.getTime() - createdAt.getTime()).toBe(3_600_000)
    await firstAdministratorLink(database.db, secrets)
    expect((await stored(idOf(first))).voidedAt).not.toBeNull()
    await database.db.update(person).set({ installationRole: 'administrator' }).where(eq(person.id, await account()))
    expect(await firstAdministratorLink(database.db, secrets)).toBeNull()
  })
})

describe('the role that serves', () => {
  it('owns nothing', async () => {
    expect(await servingRoleFault(database.db)).toBeNull()
    const owner = openDatabase(database.ownerUrl, { max: 1 })
    expect(await servingRoleFault(owner.db)).toMatch(/superuser|owns-tables/)
    await owner.close()
  })
})
