import { and, eq, isNotNull, max } from 'drizzle-orm'
import { standing as standingOf } from '../../shared/decision/standing'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { extract, studyMapping } from '../database/schema/extract'
import { study } from '../database/schema/study'
import type { FileHead } from '../readers/extractFile'
import { keepBlob, type StoredBlob } from './blobs'
import type { Accepted, Outcome } from './extractOutcome'
import { enqueue } from '../jobs/enqueue'
import { notify } from './notices'
import type { SignedPlan } from './plans'
import { appendRecord, masked } from './record'
import { actorOf, type Viewer } from './viewer'

/** A file as it was received, whatever becomes of it. */
export interface Received {
  readonly studyId: StudyId
  readonly plan: SignedPlan
  readonly receivedAt: Date
  readonly fileName: string
  readonly cutOff: string
  readonly purpose: 'interim' | 'database-lock'
  readonly viewer: Viewer
  readonly blob: StoredBlob
  readonly head: FileHead | null
  readonly treatment: string | null
  /** Stands for the hash of sealed bytes before those who may not see it. */
  readonly commitment: string | null
}

const NO_FINDINGS = { findings: [], findingCounts: { refuse: 0, hold: 0, warn: 0 } }

type Place = Pick<Received, 'studyId' | 'plan' | 'cutOff' | 'purpose'>

/** Where an accepted extract stands in the plan's schedule, and the values that go with it. */
async function acceptedValues(tx: Transaction, { studyId, plan, cutOff, purpose }: Place, { mapping, columnsBlobId, rows, subjects }: Accepted) {
  const before = await tx.select({ standing: extract.standing, look: extract.look }).from(extract)
    .where(and(eq(extract.studyId, studyId), isNotNull(extract.standing)))
  const earlier = before.flatMap(({ standing, look }) => standing === null ? [] : [{ standing, look }])
  const place = standingOf(plan.document, earlier, cutOff, purpose)
  const state = place.standing === 'unscheduled' ? 'awaiting-reason' : 'judging'
  return { ...place, state, mapping, columnsBlobId, rows, subjects } as const
}

/** The values of an extract's row that follow from what became of it. */
export async function outcomeValues(tx: Transaction, place: Place, outcome: Outcome) {
  if (outcome.state === 'awaiting-mapping') return { state: outcome.state, ...NO_FINDINGS }
  const { findings: { list, counts } } = outcome
  const found = { findings: [...list], findingCounts: { ...counts } }
  if (outcome.state !== 'accepted') return { state: outcome.state, mapping: outcome.mapping, ...found }
  return { ...await acceptedValues(tx, place, outcome), ...found }
}

/** Screens run on every accepted extract; verdicts follow in the same job unless a reason is awaited. */
export async function afterAcceptance(tx: Transaction, { studyId, extractId }: { readonly studyId: StudyId, readonly extractId: ExtractId }, { mapping, columnsBlobId }: Accepted): Promise<void> {
  await keepBlob(tx, columnsBlobId)
  await tx.insert(studyMapping).values({ studyId, mapping }).onConflictDoUpdate({ target: studyMapping.studyId, set: { mapping } })
  await enqueue(tx, 'check', { studyId, extractId })
}

async function nextNumber(tx: Transaction, studyId: StudyId): Promise<number> {
  await tx.select({ id: study.id }).from(study).where(eq(study.id, studyId)).for('update')
  const { last } = onlyRow(await tx.select({ last: max(extract.number) }).from(extract).where(eq(extract.studyId, studyId)))
  return (last ?? 0) + 1
}

/** Enters a received file with its number, its record entry and the job that it causes. */
export async function enterExtract(tx: Transaction, received: Received, outcome: Outcome): Promise<ExtractId> {
  const { studyId, plan, receivedAt, fileName, cutOff, purpose, viewer, blob, head, commitment, treatment } = received
  const id = newId<ExtractId>()
  const number = await nextNumber(tx, studyId)
  await keepBlob(tx, blob.id)
  const row = onlyRow(await tx.insert(extract).values({
    id, studyId, number, planId: plan.id, fileName, cutOff, purpose, blobId: blob.id, bytesHash: blob.hash, size: blob.size,
    columns: [...head?.header ?? []], preview: treatment === null ? head?.preview.map(cells => [...cells]) ?? null : null,
    uploadedBy: viewer.person.id, receivedAt, ...await outcomeValues(tx, received, outcome),
  }).returning())
  if (outcome.state === 'accepted') await afterAcceptance(tx, { studyId, extractId: id }, outcome)
  await notify(tx, { studyId, kind: 'extract', id })
  await appendRecord(tx, {
    chain: { studyId }, actor: actorOf(viewer), action: 'extract.received', subject: id,
    detail: {
      number, fileName, cutOff, purpose, planVersion: plan.version, state: row.state, standing: row.standing, look: row.look,
      ...commitment === null
        ? { bytesHash: blob.hash, size: blob.size }
        : { bytesHash: masked(blob.hash), size: masked(blob.size), commitment },
      ...treatment === null ? {} : { column: treatment },
    },
  })
  return id
}
