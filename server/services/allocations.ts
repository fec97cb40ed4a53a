import { and, desc, eq, inArray } from 'drizzle-orm'
import type { AllocationId } from '../../shared/schemas/domainIds'
import type { PersonId, StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { settlement } from '../database/schema/deviation'
import { allocation, extract } from '../database/schema/extract'
import { person } from '../database/schema/person'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { readAllocation, type AllocationReading } from '../readers/allocationList'
import { keepBlob, putBlob, readBlob, type StoredBlob } from './blobs'
import { committed } from './commitment'
import { recordExposure } from './exposures'
import { rememberedMapping } from './extractViews'
import { enqueue } from '../jobs/enqueue'
import { planInForceAt, type SignedPlan } from './plans'
import { appendRecord, masked } from './record'
import { requireSeparation } from './separation'
import { actorOf, type Viewer } from './viewer'

type AllocationRow = typeof allocation.$inferSelect

const viewOf = ({ id, kind, state, receivedAt, hash, subjects, findings }: AllocationRow, uploadedBy: { readonly id: string, readonly name: string }) =>
  ({ id, kind, state, uploadedBy, receivedAt, hash, subjects, findings })

/** Lists of a study, newest first, for cleared members. Findings quote what stands in a list, so reading them exposes. */
export function listAllocations(db: Database, { studyId, viewer }: { studyId: StudyId, viewer: Viewer }) {
  return db.transaction(async (tx) => {
    const rows = await tx.select({ row: allocation, by: { id: person.id, name: person.name } }).from(allocation)
      .innerJoin(person, eq(person.id, allocation.uploadedBy))
      .where(eq(allocation.studyId, studyId)).orderBy(desc(allocation.receivedAt), desc(allocation.id))
    const quoting = rows.find(({ row }) => row.findings.length > 0)
    if (quoting) await recordExposure(tx, { studyId, viewer, how: 'allocation', subject: quoting.row.id })
    return { allocations: rows.map(({ row, by }) => viewOf(row, by)) }
  })
}

/** Neither an uploader of extracts nor a settler brings the allocation. */
async function requireOtherHands(db: Queryable, studyId: StudyId, personId: PersonId): Promise<void> {
  const uploads = await db.selectDistinct({ by: extract.uploadedBy }).from(extract).where(eq(extract.studyId, studyId))
  const settled = await db.select({ first: settlement.settledBy, second: settlement.secondBy }).from(settlement).where(eq(settlement.studyId, studyId))
  requireSeparation('allocation.upload', personId, {
    'extract.upload': uploads.map(({ by }) => by),
    'deviation.settle': settled.flatMap(({ first, second }) => second === null ? [first] : [first, second]),
  })
}

/** @throws {DomainError} `plan-not-signed`, or `wrong-state` where an allocation list has no place. */
async function blindedPlan(db: Queryable, studyId: StudyId): Promise<SignedPlan> {
  const plan = await planInForceAt(db, studyId, new Date())
  if (!plan) throw new DomainError('plan-not-signed')
  if (plan.document.blinding !== 'blinded') throw new DomainError('wrong-state', [{ code: 'study-open-label' }])
  const { blindBrokenAt } = onlyRow(await db.select({ blindBrokenAt: study.blindBrokenAt }).from(study).where(eq(study.id, studyId)))
  if (blindBrokenAt !== null) throw new DomainError('wrong-state', [{ code: 'blind-is-broken' }])
  return plan
}

export interface UploadAllocation {
  readonly studyId: StudyId
  readonly kind: 'true' | 'dummy'
  readonly source: AsyncIterable<Uint8Array>
  readonly viewer: Viewer
}

interface Received { readonly blob: StoredBlob, readonly commitment: string, readonly reading: AllocationReading }

/**
 * Takes in an allocation list: sealed on arrival, opened in the judge alone. Extracts that were received before
 * are judged again with it, each under its own plan version. A refused list is kept with its reasons.
 */
export async function uploadAllocation(db: Database, { studyId, kind, source, viewer }: UploadAllocation) {
  if (kind === 'dummy') throw new DomainError('invalid-input', [{ pointer: '/query/kind', code: 'practice-lists-not-taken' }])
  const plan = await blindedPlan(db, studyId)
  await requireOtherHands(db, studyId, viewer.person.id)
  const { bytes, commitment } = committed(source)
  const blob = await putBlob(db, bytes, { sealed: true })
  const mapping = await rememberedMapping(db, studyId)
  const reading = await readAllocation(readBlob(db, blob.id), plan.document, mapping?.subject ?? [])
  return db.transaction(tx => keep(tx, { studyId, viewer }, { blob, commitment: commitment(), reading }))
}

async function keep(tx: Transaction, { studyId, viewer }: Pick<UploadAllocation, 'studyId' | 'viewer'>, { blob, commitment, reading }: Received) {
  const { subjects, findings: { list, counts } } = reading
  const state = counts.refuse > 0 ? 'refused' : 'accepted'
  await keepBlob(tx, blob.id)
  const row = onlyRow(await tx.insert(allocation).values({
    id: newId<AllocationId>(), studyId, kind: 'true', state, blobId: blob.id, hash: blob.hash, commitment, subjects: subjects.length,
    findings: [...list], uploadedBy: viewer.person.id,
  }).returning())
  await recordExposure(tx, { studyId, viewer, how: 'allocation', subject: row.id })
  if (state === 'accepted') await judgeAgain(tx, studyId)
  await appendRecord(tx, {
    chain: { studyId }, actor: actorOf(viewer), action: 'allocation.received', subject: row.id,
    detail: { commitment, state: masked(state), hash: masked(blob.hash), subjects: masked(subjects.length), findings: masked(counts.refuse) },
  })
  return viewOf(row, { id: viewer.person.id, name: viewer.person.name })
}

async function judgeAgain(tx: Transaction, studyId: StudyId): Promise<void> {
  const rows = await tx.select({ id: extract.id }).from(extract).where(and(eq(extract.studyId, studyId), inArray(extract.state, ['judging', 'checked']))).orderBy(extract.number)
  for (const { id: extractId } of rows) await enqueue(tx, 'check', { studyId, extractId })
}
