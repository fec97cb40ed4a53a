import { and, asc, eq, isNull, sql } from 'drizzle-orm'
import type { StudyRole } from '../../shared/access/actions'
import type { MemberId, PersonId, StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { studyMember } from '../database/schema/member'
import { person } from '../database/schema/person'
import { DomainError } from '../domainError'
import { endClearanceOf } from './clearances'
import { appendRecord } from './record'
import { actorOf, type Viewer } from './viewer'

const view = {
  id: studyMember.id,
  person: { id: person.id, name: person.name },
  role: studyMember.role,
  reason: studyMember.reason,
  from: studyMember.from,
  until: studyMember.until,
  endReason: studyMember.endReason,
}

/** Who holds or held which role in a study, oldest first. */
export async function listMembers(db: Queryable, { studyId }: { studyId: StudyId }) {
  const members = await db.select(view).from(studyMember).innerJoin(person, eq(person.id, studyMember.personId))
    .where(eq(studyMember.studyId, studyId)).orderBy(asc(studyMember.from), asc(studyMember.id))
  return { members }
}

async function readMember(db: Queryable, { studyId, memberId }: { studyId: StudyId, memberId: MemberId }) {
  const [found] = await db.select(view).from(studyMember).innerJoin(person, eq(person.id, studyMember.personId))
    .where(and(eq(studyMember.studyId, studyId), eq(studyMember.id, memberId)))
  if (!found) throw new DomainError('not-found')
  return found
}

/** An account that can be given a role: active, and not that of an administrator, who holds no membership. */
async function admissible(tx: Transaction, personId: PersonId): Promise<void> {
  const [found] = await tx.select({ installationRole: person.installationRole, deactivatedAt: person.deactivatedAt })
    .from(person).where(eq(person.id, personId)).for('share')
  if (!found) throw new DomainError('invalid-input', [{ pointer: '/personId', code: 'no-such-person' }])
  if (found.deactivatedAt) throw new DomainError('wrong-state', [{ pointer: '/personId', code: 'person-deactivated' }])
  if (found.installationRole) throw new DomainError('separation-of-duties', [{ pointer: '/personId', code: 'administrator-holds-no-role' }])
}

export interface GrantMember {
  readonly studyId: StudyId
  readonly personId: PersonId
  readonly role: StudyRole
  readonly reason: string
  readonly viewer: Viewer
}

export function grantMember(db: Database, { studyId, personId, role, reason, viewer }: GrantMember) {
  return db.transaction(async (tx) => {
    await admissible(tx, personId)
    const id = newId<MemberId>()
    const inserted = await tx.insert(studyMember).values({ id, studyId, personId, role, reason, grantedBy: viewer.person.id })
      .onConflictDoNothing().returning({ id: studyMember.id })
    if (inserted.length === 0) throw new DomainError('already-done', [{ pointer: '/role', code: 'role-held' }])
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'member.granted', subject: personId, detail: { memberId: id, role, reason },
    })
    return readMember(tx, { studyId, memberId: id })
  })
}

export interface EndMember {
  readonly studyId: StudyId
  readonly memberId: MemberId
  readonly reason: string
  readonly viewer: Viewer
}

/** Ends one role of one person; with the role `biostatistician` their clearance ends too. */
export function endMember(db: Database, { studyId, memberId, reason, viewer }: EndMember) {
  return db.transaction(async (tx) => {
    const member = await readMember(tx, { studyId, memberId })
    const ended = await tx.update(studyMember).set({ until: sql`now()`, endedBy: viewer.person.id, endReason: reason })
      .where(and(eq(studyMember.studyId, studyId), eq(studyMember.id, memberId), isNull(studyMember.until))).returning({ id: studyMember.id })
    if (ended.length === 0) throw new DomainError('already-done')
    if (member.role === 'biostatistician') await endClearanceOf(tx, { studyId, personId: member.person.id, reason, viewer })
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'member.ended', subject: member.person.id, detail: { memberId, role: member.role, reason },
    })
    return readMember(tx, { studyId, memberId })
  })
}
