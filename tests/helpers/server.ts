import { randomBytes, randomUUID } from 'node:crypto'
import { hash } from '@node-rs/argon2'
import { grantClearanceOperation, proposeClearanceOperation } from '#shared/contract/clearances'
import { grantMemberOperation } from '#shared/contract/members'
import { createStudyOperation } from '#shared/contract/studies'
import type { StudyRole } from '#shared/access/actions'
import type { PersonId } from '#shared/schemas/ids'
import { openDatabase, type OpenDatabase } from '../../server/database/client'
import { newId } from '../../server/database/newId'
import { person } from '../../server/database/schema/person'
import { signedInAs, type Client } from './client'
import { fromEnvironment } from './database'

/** Somebody with an account on the shared server. */
export interface Account {
  readonly id: PersonId
  readonly name: string
  readonly email: string
  readonly password: string
}

/** Least cost of argon2id: the hash itself says it, so that the server verifies it quickly. */
const CHEAP = { memoryCost: 8, timeCost: 1, parallelism: 1 }

let server: OpenDatabase | undefined

/** The shared server's database, as the application's role: for people's accounts and for looking, not for results. */
export function serverDatabase(): OpenDatabase {
  server ??= openDatabase(fromEnvironment('DATABASE_URL'), { max: 2 })
  return server
}

/** An account with a password, as if its invitation had been taken up. */
export async function makePerson({ name = 'Test Person', administrator = false }: { name?: string, administrator?: boolean } = {}): Promise<Account> {
  const account = { id: newId<PersonId>(), name, email: `${randomUUID()}@example.org`, password: randomBytes(12).toString('base64url') }
  await serverDatabase().db.insert(person).values({
    id: account.id, name, email: account.email, passwordHash: await hash(account.password, CHEAP),
    installationRole: administrator ? 'administrator' : null,
  })
  return account
}

export interface SignedInAccount extends Account { readonly client: Client }

export async function makeClient(options: Parameters<typeof makePerson>[0] = {}): Promise<SignedInAccount> {
  const account = await makePerson(options)
  return { ...account, client: await signedInAs(account) }
}

export async function makeStudy(administrator: Client): Promise<string> {
  const { id } = await administrator.call(createStudyOperation, {
    body: { protocolNumber: `T-${randomUUID().slice(0, 18)}`, title: 'A study made by a test', phase: '2', sponsor: 'Example Sponsor' },
  })
  return id
}

export function admit(administrator: Client, { studyId, personId, role }: { studyId: string, personId: string, role: StudyRole }) {
  return administrator.call(grantMemberOperation, { params: { studyId }, body: { personId, role, reason: 'Needed by the test.' } })
}

/** Clears a biostatistician of the study for arms: proposed by another one, granted by an administrator. */
export async function clear(administrator: Client, { studyId, personId, proposer }: { studyId: string, personId: string, proposer: Client }) {
  const { id } = await proposer.call(proposeClearanceOperation, { params: { studyId }, body: { personId, reason: 'Firewalled for the test.' } })
  return administrator.call(grantClearanceOperation, { params: { studyId, clearanceId: id } })
}

/** Roles of a study as tests name them; two biostatisticians, one more who is cleared. */
const CAST = {
  biostatistician: 'biostatistician', reviewer: 'biostatistician', cleared: 'biostatistician',
  dataManager: 'data-manager', investigator: 'investigator', monitor: 'monitor',
} as const satisfies Record<string, StudyRole>

type CastName = keyof typeof CAST

/** A study of its own with somebody signed in for every role, an administrator, and a stranger who is in no study. */
export async function makeStudyWithRoles() {
  const administrator = await makeClient({ name: 'Ada Administrator', administrator: true })
  const studyId = await makeStudy(administrator.client)
  const members = await Promise.all(Object.entries(CAST).map(async ([name, role]) => ({ name, role, account: await makeClient({ name: `Test ${name}` }) })))
  for (const { role, account } of members) await admit(administrator.client, { studyId, personId: account.id, role }) // one by one: lists keep this order
  const as = Object.fromEntries(members.map(({ name, account }) => [name, account])) as Record<CastName, SignedInAccount>
  await clear(administrator.client, { studyId, personId: as.cleared.id, proposer: as.biostatistician.client })
  return { studyId, as: { ...as, administrator, stranger: await makeClient({ name: 'Test stranger' }) } }
}
