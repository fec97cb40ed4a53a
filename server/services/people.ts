import { asc, eq, sql } from 'drizzle-orm'
import type { InstallationRole } from '../../shared/access/actions'
import type { PersonId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { violatesUnique } from '../database/failures'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { person } from '../database/schema/person'
import { DomainError } from '../domainError'
import { enqueueMail } from './mails'
import { invite } from './invitations'
import { appendRecord } from './record'
import { endSessionsOf } from './sessions'
import { actorOf, type Viewer } from './viewer'

const view = {
  id: person.id,
  name: person.name,
  email: person.email,
  installationRole: person.installationRole,
  createdAt: person.createdAt,
  deactivatedAt: person.deactivatedAt,
  /** Whether the invitation has been taken up. */
  ready: sql<boolean>`${person.passwordHash} is not null`,
}

export async function listPeople(db: Queryable) {
  return { people: await db.select(view).from(person).orderBy(asc(person.name), asc(person.id)) }
}

export interface CreatePerson {
  readonly name: string
  readonly email: string
  readonly installationRole: InstallationRole | null
  readonly viewer: Viewer
}

/** Makes an account without a password and mails its owner the way to set one. */
export async function createPerson(db: Database, { viewer, ...account }: CreatePerson) {
  const id = newId<PersonId>()
  try {
    return await db.transaction(async (tx) => {
      const created = onlyRow(await tx.insert(person).values({ id, ...account }).returning(view))
      await sendInvitation(tx, id)
      await appendRecord(tx, {
        chain: 'installation', actor: actorOf(viewer), action: 'person.created', subject: id,
        detail: { name: account.name, email: account.email, installationRole: account.installationRole },
      })
      return created
    })
  }
  catch (error) {
    if (violatesUnique(error, 'person_email_unique')) throw new DomainError('already-done', [{ pointer: '/email', code: 'email-taken' }])
    throw error
  }
}

async function sendInvitation(tx: Transaction, personId: PersonId): Promise<void> {
  const invitationId = await invite(tx, personId)
  await enqueueMail(tx, { kind: 'invitation', to: personId, invitationId })
}

async function activePerson(tx: Transaction, personId: PersonId) {
  const [found] = await tx.select(view).from(person).where(eq(person.id, personId)).for('update')
  if (!found) throw new DomainError('not-found')
  if (found.deactivatedAt) throw new DomainError('wrong-state', [{ code: 'person-deactivated' }])
  return found
}

interface PersonAct { readonly personId: PersonId, readonly viewer: Viewer }

/** A fresh way to set a password, for who lost the first or forgot theirs; the earlier link ends. */
export function inviteAgain(db: Database, { personId, viewer }: PersonAct): Promise<void> {
  return db.transaction(async (tx) => {
    await activePerson(tx, personId)
    await sendInvitation(tx, personId)
    await appendRecord(tx, { chain: 'installation', actor: actorOf(viewer), action: 'person.invited', subject: personId, detail: {} })
  })
}

/**
 * Closes an account: its sessions end and it can neither sign in nor sign. What it did stays. Nobody closes
 * their own, so an administrator always remains.
 */
export function deactivatePerson(db: Database, { personId, reason, viewer }: PersonAct & { readonly reason: string }) {
  if (personId === viewer.person.id) throw new DomainError('separation-of-duties', [{ code: 'own-account' }])
  return db.transaction(async (tx) => {
    await activePerson(tx, personId)
    const closed = onlyRow(await tx.update(person).set({ deactivatedAt: sql`now()` }).where(eq(person.id, personId)).returning(view))
    await endSessionsOf(tx, personId, 'deactivated')
    await appendRecord(tx, { chain: 'installation', actor: actorOf(viewer), action: 'person.deactivated', subject: personId, detail: { reason } })
    return closed
  })
}
