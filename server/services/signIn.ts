import { eq } from 'drizzle-orm'
import type { PersonId, SessionId } from '../../shared/schemas/ids'
import type { Database, Transaction } from '../database/client'
import { person } from '../database/schema/person'
import { DomainError } from '../domainError'
import { countAttempt, forgiveAttempt } from './attempts'
import { verifyPassword } from './passwords'
import { appendRecord, type Actor } from './record'
import { openSession } from './sessions'
import type { RequestFacts } from './viewer'

export interface SignIn {
  readonly email: string
  readonly password: string
  readonly request: RequestFacts
}

type Account = Pick<typeof person.$inferSelect, 'id' | 'name' | 'installationRole' | 'passwordHash' | 'deactivatedAt'>

/**
 * Opens a session for identifier and password. Both outcomes enter the installation's record; an identifier
 * that belongs to nobody is not kept, since people type passwords into the wrong field.
 *
 * @throws {DomainError} `sign-in-failed` whatever was wrong, `too-many-attempts` with the seconds to wait.
 */
export async function signIn(db: Database, { email, password, request }: SignIn): Promise<{ sessionId: SessionId, personId: PersonId }> {
  const identifier = email.trim().toLowerCase()
  const attempt = { kind: 'sign-in', account: identifier, origin: request.origin } as const
  await countAttempt(db, attempt)
  const account = await findAccount(db, identifier)
  const matches = await verifyPassword(account?.passwordHash ?? null, password)
  if (!account || !matches || account.deactivatedAt) {
    await recordRefusal(db, account, request)
    throw new DomainError('sign-in-failed')
  }
  const sessionId = await db.transaction(tx => recordedSession(tx, account, request))
  await forgiveAttempt(db, attempt)
  return { sessionId, personId: account.id }
}

async function findAccount(db: Database, email: string): Promise<Account | undefined> {
  const { id, name, installationRole, passwordHash, deactivatedAt } = person
  const [account] = await db.select({ id, name, installationRole, passwordHash, deactivatedAt }).from(person).where(eq(person.email, email))
  return account
}

const asActor = (account: Account, request: RequestFacts): Actor =>
  ({ personId: account.id, name: account.name, roles: account.installationRole ? [account.installationRole] : [], ...request })

async function recordedSession(tx: Transaction, account: Account, request: RequestFacts): Promise<SessionId> {
  const sessionId = await openSession(tx, { personId: account.id, origin: request.origin })
  await appendRecord(tx, {
    chain: 'installation', actor: asActor(account, request), action: 'session.started', subject: sessionId, detail: { factor: 'password' },
  })
  return sessionId
}

function recordRefusal(db: Database, account: Account | undefined, request: RequestFacts): Promise<void> {
  const nobody: Actor = { personId: null, name: null, roles: [], ...request }
  return db.transaction(async (tx) => {
    await appendRecord(tx, {
      chain: 'installation', actor: nobody, action: 'session.refused', subject: account?.id ?? 'unknown',
      detail: { account: account ? (account.deactivatedAt ? 'deactivated' : 'known') : 'unknown' },
    })
  })
}
