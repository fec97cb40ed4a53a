import { and, asc, eq, isNull, sql } from 'drizzle-orm'
import { alias } from 'drizzle-orm/pg-core'
import type { ClearanceId, PersonId, StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { clearance, studyMember } from '../database/schema/member'
import { person } from '../database/schema/person'
import { DomainError } from '../domainError'
import { appendRecord } from './record'
import { requireSeparation } from './separation'
import { actorOf, type Viewer } from './viewer'

const holder = alias(person, 'holder')
const proposer = alias(person, 'proposer')
const granter = alias(person, 'granter')

function clearances(db: Queryable) {
  return db.select({
    id: clearance.id,
    person: { id: holder.id, name: holder.name },
    reason: clearance.reason,
    proposedBy: { id: proposer.id, name: proposer.name },
    proposedAt: clearance.proposedAt,
    grantedBy: { id: granter.id, name: granter.name },
    grantedAt: clearance.grantedAt,
    endedAt: clearance.endedAt,
    endReason: clearance.endReason,
  }).from(clearance)
    .innerJoin(holder, eq(holder.id, clearance.personId))
    .innerJoin(proposer, eq(proposer.id, clearance.proposedBy))
    .leftJoin(granter, eq(granter.id, clearance.grantedBy))
    .$dynamic()
}

/** Proposals and grants of a study with their ends, oldest first. */
export async function listClearances(db: Queryable, { studyId }: { studyId: StudyId }) {
  return { clearances: await clearances(db).where(eq(clearance.studyId, studyId)).orderBy(asc(clearance.proposedAt), asc(clearance.id)) }
}

interface OneClearance { readonly studyId: StudyId, readonly clearanceId: ClearanceId }

const isOne = ({ studyId, clearanceId }: OneClearance) => and(eq(clearance.studyId, studyId), eq(clearance.id, clearanceId))

async function readClearance(db: Queryable, one: OneClearance) {
  const [found] = await clearances(db).where(isOne(one))
  if (!found) throw new DomainError('not-found')
  return found
}

/** Clearance is for biostatisticians of the study only. */
async function requireBiostatistician(tx: Transaction, studyId: StudyId, personId: PersonId): Promise<void> {
  const [found] = await tx.select({ id: studyMember.id }).from(studyMember).where(and(
    eq(studyMember.studyId, studyId), eq(studyMember.personId, personId), eq(studyMember.role, 'biostatistician'), isNull(studyMember.until),
  )).for('share')
  if (!found) throw new DomainError('wrong-state', [{ pointer: '/personId', code: 'not-a-biostatistician' }])
}

export interface ProposeClearance {
  readonly studyId: StudyId
  readonly personId: PersonId
  readonly reason: string
  readonly viewer: Viewer
}

/** A biostatistician asks that another be let behind the blind. */
export function proposeClearance(db: Database, { studyId, personId, reason, viewer }: ProposeClearance) {
  requireSeparation('clearance.propose', viewer.person.id, { 'clearance.hold': [personId] })
  return db.transaction(async (tx) => {
    await requireBiostatistician(tx, studyId, personId)
    const id = newId<ClearanceId>()
    const inserted = await tx.insert(clearance).values({ id, studyId, personId, reason, proposedBy: viewer.person.id })
      .onConflictDoNothing().returning({ id: clearance.id })
    if (inserted.length === 0) throw new DomainError('already-done', [{ pointer: '/personId', code: 'clearance-open' }])
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'clearance.proposed', subject: personId, detail: { clearanceId: id, reason },
    })
    return readClearance(tx, { studyId, clearanceId: id })
  })
}

/** The open row, locked; a closed one has nothing left to decide. */
async function openClearance(tx: Transaction, one: OneClearance) {
  const [found] = await tx.select().from(clearance).where(isOne(one)).for('update')
  if (!found) throw new DomainError('not-found')
  if (found.endedAt) throw new DomainError('already-done')
  return found
}

export interface DecideClearance extends OneClearance { readonly viewer: Viewer }

/** An administrator grants what a biostatistician proposed; from now on the person may see arms. */
export function grantClearance(db: Database, { viewer, ...one }: DecideClearance) {
  return db.transaction(async (tx) => {
    const open = await openClearance(tx, one)
    if (open.grantedAt) throw new DomainError('already-done')
    requireSeparation('clearance.grant', viewer.person.id, { 'clearance.hold': [open.personId], 'clearance.propose': [open.proposedBy] })
    await requireBiostatistician(tx, one.studyId, open.personId)
    await tx.update(clearance).set({ grantedBy: viewer.person.id, grantedAt: sql`now()` }).where(isOne(one))
    await appendRecord(tx, {
      chain: { studyId: one.studyId }, actor: actorOf(viewer), action: 'clearance.granted', subject: open.personId,
      detail: { clearanceId: one.clearanceId, proposedBy: open.proposedBy },
    })
    return readClearance(tx, one)
  })
}

interface End { readonly reason: string, readonly viewer: Viewer }

async function endRow(tx: Transaction, row: { id: ClearanceId, studyId: StudyId, personId: PersonId, grantedAt: Date | null }, { reason, viewer }: End) {
  await tx.update(clearance).set({ endedBy: viewer.person.id, endedAt: sql`now()`, endReason: reason })
    .where(isOne({ studyId: row.studyId, clearanceId: row.id }))
  await appendRecord(tx, {
    chain: { studyId: row.studyId }, actor: actorOf(viewer), action: 'clearance.ended', subject: row.personId,
    detail: { clearanceId: row.id, reason, granted: row.grantedAt !== null },
  })
}

/** Ends a clearance or declines a proposal; exposure, once begun, stays. */
export function endClearance(db: Database, { reason, viewer, ...one }: DecideClearance & End) {
  return db.transaction(async (tx) => {
    await endRow(tx, await openClearance(tx, one), { reason, viewer })
    return readClearance(tx, one)
  })
}

/** Ends whatever clearance or proposal a person has in a study, as part of what ended their role. */
export async function endClearanceOf(tx: Transaction, { studyId, personId, ...end }: { studyId: StudyId, personId: PersonId } & End): Promise<void> {
  const [open] = await tx.select().from(clearance)
    .where(and(eq(clearance.studyId, studyId), eq(clearance.personId, personId), isNull(clearance.endedAt))).for('update')
  if (open) await endRow(tx, open, end)
}
