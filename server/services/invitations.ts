import { and, eq, isNull, sql } from 'drizzle-orm'
import type { InvitationId, PersonId } from '../../shared/schemas/ids'
import { config } from '../config'
import type { Database, Queryable, Transaction } from '../database/client'
import { violatesUnique } from '../database/failures'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { invitation, person } from '../database/schema/person'
import { DomainError } from '../domainError'
import { countAttempt, forgiveAttempt } from './attempts'
import { invitationLink, readInvitationToken } from './invitationToken'
import { hashPassword } from './passwords'
import { appendRecord } from './record'
import { endSessionsOf } from './sessions'
import type { RequestFacts } from './viewer'

const VALID_FOR = { person: sql`now() + interval '3 days'`, firstAdministrator: sql`now() + interval '1 hour'` }

/** Gives a person one more way to set a password; earlier invitations of theirs end. */
export async function invite(tx: Transaction, personId: PersonId): Promise<InvitationId> {
  await tx.update(invitation).set({ voidedAt: sql`now()` })
    .where(and(eq(invitation.personId, personId), isNull(invitation.usedAt), isNull(invitation.voidedAt)))
  const id = newId<InvitationId>()
  await tx.insert(invitation).values({ id, personId, expiresAt: VALID_FOR.person })
  return id
}

/**
 * The link by which the first administrator makes their account, valid one hour; earlier such links end.
 *
 * @returns null once there is an administrator.
 */
export function firstAdministratorLink(db: Database, { origin, authSecret }: { origin: string, authSecret: string }): Promise<string | null> {
  return db.transaction(async (tx) => {
    if (await hasAdministrator(tx)) return null
    await tx.update(invitation).set({ voidedAt: sql`now()` })
      .where(and(isNull(invitation.personId), isNull(invitation.usedAt), isNull(invitation.voidedAt)))
    const id = newId<InvitationId>()
    await tx.insert(invitation).values({ id, expiresAt: VALID_FOR.firstAdministrator })
    return invitationLink(origin, authSecret, id)
  })
}

async function hasAdministrator(db: Queryable): Promise<boolean> {
  const [found] = await db.select({ id: person.id }).from(person).where(eq(person.installationRole, 'administrator')).limit(1)
  return found !== undefined
}

/** The invitation that a token stands for, before anything costly is done. */
async function readToken(db: Database, { token, request }: { token: string, request: RequestFacts }): Promise<InvitationId> {
  const attempt = { kind: 'invitation', account: token, origin: request.origin } as const
  await countAttempt(db, attempt)
  const id = readInvitationToken(config().secrets.authSecret, token)
  if (!id) throw new DomainError('not-found')
  await forgiveAttempt(db, attempt)
  return id
}

/** The row, locked until the transaction ends; whatever is wrong with it reads `not-found`. */
async function openInvitation(db: Queryable, id: InvitationId) {
  const [open] = await db.select().from(invitation)
    .where(and(eq(invitation.id, id), isNull(invitation.usedAt), isNull(invitation.voidedAt), sql`${invitation.expiresAt} > now()`))
    .for('update')
  if (!open) throw new DomainError('not-found')
  return open
}

/** Whom a link invites; null for the first administrator, who says so themselves. */
export async function readInvitation(db: Database, link: { token: string, request: RequestFacts }) {
  const id = await readToken(db, link)
  return db.transaction(async (tx) => {
    const { personId, expiresAt } = await openInvitation(tx, id)
    if (!personId) return { person: null, expiresAt }
    const [invited] = await tx.select({ name: person.name, email: person.email }).from(person)
      .where(and(eq(person.id, personId), isNull(person.deactivatedAt)))
    if (!invited) throw new DomainError('not-found')
    return { person: invited, expiresAt }
  })
}

export interface AcceptInvitation {
  readonly token: string
  readonly password: string
  /** Given by the first administrator, by nobody else. */
  readonly self: { readonly name: string, readonly email: string } | null
  readonly request: RequestFacts
}

/** Sets the password of an account, once per invitation; sessions opened under an older password end. */
export async function acceptInvitation(db: Database, { token, password, self, request }: AcceptInvitation): Promise<void> {
  const id = await readToken(db, { token, request })
  const passwordHash = await hashPassword(password)
  await db.transaction(async (tx) => {
    const open = await openInvitation(tx, id)
    const account = open.personId
      ? await takeUp(tx, { personId: open.personId, passwordHash, self })
      : await makeFirstAdministrator(tx, { passwordHash, self })
    await tx.update(invitation).set({ usedAt: sql`now()`, personId: account.id }).where(eq(invitation.id, open.id))
    await appendRecord(tx, {
      chain: 'installation', actor: { personId: account.id, name: account.name, roles: account.installationRole ? [account.installationRole] : [], ...request },
      action: 'person.password-set', subject: account.id, detail: { firstAdministrator: open.personId === null },
    })
  })
}

type Self = AcceptInvitation['self']

async function takeUp(tx: Transaction, { personId, passwordHash, self }: { personId: PersonId, passwordHash: string, self: Self }) {
  if (self) throw new DomainError('invalid-input', [{ pointer: '/self', code: 'unknown-field' }])
  const [account] = await tx.update(person).set({ passwordHash })
    .where(and(eq(person.id, personId), isNull(person.deactivatedAt))).returning()
  if (!account) throw new DomainError('not-found')
  await endSessionsOf(tx, personId, 'password-changed')
  return account
}

async function makeFirstAdministrator(tx: Transaction, { passwordHash, self }: { passwordHash: string, self: Self }) {
  if (!self) throw new DomainError('invalid-input', [{ pointer: '/self', code: 'required' }])
  if (await hasAdministrator(tx)) throw new DomainError('not-found')
  try {
    return onlyRow(await tx.insert(person)
      .values({ id: newId<PersonId>(), ...self, passwordHash, installationRole: 'administrator' }).returning())
  }
  catch (error) {
    if (violatesUnique(error, 'person_email_unique')) throw new DomainError('already-done', [{ pointer: '/self/email', code: 'email-taken' }])
    throw error
  }
}
