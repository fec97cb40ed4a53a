import { and, desc, eq, isNull, sql } from 'drizzle-orm'
import type { InstallationRole } from '../../shared/access/actions'
import type { PersonId, SessionId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { person } from '../database/schema/person'
import type { sessionEnd } from '../database/schema/session'
import { signInSession } from '../database/schema/session'
import { DomainError } from '../domainError'
import { appendRecord } from './record'
import { actorOf, outsideStudies, type RequestFacts, type Viewer } from './viewer'

export type SessionEnd = typeof sessionEnd.enumValues[number]

/** A session that may be used, with whose it is. */
export interface SignedIn {
  readonly sessionId: SessionId
  readonly person: { readonly id: PersonId, readonly name: string, readonly email: string }
  readonly installationRole: InstallationRole | null
}

const idle = sql<boolean>`${signInSession.lastSeenAt} < now() - interval '30 minutes'`
const tooOld = sql<boolean>`${signInSession.createdAt} < now() - interval '12 hours'`
const notLately = sql<boolean>`${signInSession.lastSeenAt} < now() - interval '1 minute'`

export async function openSession(tx: Transaction, { personId, origin }: { personId: PersonId, origin: string }): Promise<SessionId> {
  const id = newId<SessionId>()
  await tx.insert(signInSession).values({ id, personId, origin, factor: 'password' })
  return id
}

/**
 * Looks up a session for a request and notes that it was seen, at most once a minute.
 *
 * @returns null when it is unknown or ended, idle over 30 minutes, older than 12 hours or its person deactivated.
 */
export async function useSession(db: Database, sessionId: SessionId): Promise<SignedIn | null> {
  const [row] = await db
    .select({ person: { id: person.id, name: person.name, email: person.email }, installationRole: person.installationRole,
      deactivatedAt: person.deactivatedAt, idle, tooOld, notLately })
    .from(signInSession).innerJoin(person, eq(person.id, signInSession.personId))
    .where(and(eq(signInSession.id, sessionId), isNull(signInSession.endedAt)))
  if (!row) return null
  const why = expiry(row)
  if (why) {
    await markEnded(db, sessionId, why)
    return null
  }
  if (row.notLately) await db.update(signInSession).set({ lastSeenAt: sql`now()` }).where(eq(signInSession.id, sessionId))
  return { sessionId, person: row.person, installationRole: row.installationRole }
}

function expiry(row: { deactivatedAt: Date | null, idle: boolean, tooOld: boolean }): SessionEnd | null {
  if (row.deactivatedAt) return 'deactivated'
  if (row.tooOld) return 'too-old'
  return row.idle ? 'idle' : null
}

/** @returns whether it was still open. */
async function markEnded(db: Queryable, sessionId: SessionId, why: SessionEnd): Promise<boolean> {
  const ended = await db.update(signInSession).set({ endedAt: sql`now()`, endedWhy: why })
    .where(and(eq(signInSession.id, sessionId), isNull(signInSession.endedAt))).returning({ id: signInSession.id })
  return ended.length > 0
}

/** Ends whatever sessions a person has; part of what made them end. */
export async function endSessionsOf(tx: Transaction, personId: PersonId, why: SessionEnd): Promise<void> {
  await tx.update(signInSession).set({ endedAt: sql`now()`, endedWhy: why })
    .where(and(eq(signInSession.personId, personId), isNull(signInSession.endedAt)))
}

/** Ends a session at sign-out; ending one that has ended already is no error. */
export function signOut(db: Database, { sessionId, request }: { sessionId: SessionId, request: RequestFacts }): Promise<void> {
  return db.transaction(async (tx) => {
    const [owner] = await tx.select({ id: person.id, name: person.name, email: person.email, installationRole: person.installationRole })
      .from(signInSession).innerJoin(person, eq(person.id, signInSession.personId)).where(eq(signInSession.id, sessionId))
    if (!owner || !await markEnded(tx, sessionId, 'signed-out')) return
    const { installationRole, ...self } = owner
    const viewer: Viewer = { person: self, sessionId, standing: outsideStudies(installationRole), request }
    await recordEnd(tx, viewer, sessionId, 'signed-out')
  })
}

/** Ends one of the viewer's own sessions, e.g. on a computer left behind. */
export function endOwnSession(db: Database, { viewer, sessionId }: { viewer: Viewer, sessionId: SessionId }): Promise<void> {
  return db.transaction(async (tx) => {
    const [own] = await tx.select({ endedAt: signInSession.endedAt }).from(signInSession)
      .where(and(eq(signInSession.id, sessionId), eq(signInSession.personId, viewer.person.id)))
    if (!own) throw new DomainError('not-found')
    if (own.endedAt || !await markEnded(tx, sessionId, 'ended-by-person')) throw new DomainError('already-done')
    await recordEnd(tx, viewer, sessionId, 'ended-by-person')
  })
}

async function recordEnd(tx: Transaction, viewer: Viewer, sessionId: SessionId, why: SessionEnd): Promise<void> {
  await appendRecord(tx, {
    chain: 'installation', actor: actorOf(viewer), action: 'session.ended', subject: sessionId, detail: { why },
  })
}

/** The viewer's sessions that are neither ended nor expired, newest first. */
export async function listOwnSessions(db: Queryable, { viewer }: { viewer: Viewer }) {
  const sessions = await db
    .select({ id: signInSession.id, createdAt: signInSession.createdAt, lastSeenAt: signInSession.lastSeenAt, origin: signInSession.origin })
    .from(signInSession)
    .where(and(eq(signInSession.personId, viewer.person.id), isNull(signInSession.endedAt), sql`not ${idle}`, sql`not ${tooOld}`))
    .orderBy(desc(signInSession.createdAt))
  return { sessions: sessions.map(session => ({ ...session, current: session.id === viewer.sessionId })) }
}
