import { and, eq } from 'drizzle-orm'
import type { ColumnMapping } from '../../shared/contract/extracts'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database, Transaction } from '../database/client'
import { extract } from '../database/schema/extract'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { mappingFaults } from '../readers/mapping'
import { bindingExtract } from './binding'
import { readBlob } from './blobs'
import type { ExtractRow } from './checkedReports'
import { recordExposure } from './exposures'
import { afterAcceptance, outcomeValues } from './extractEntry'
import { accepted } from './extractOutcome'
import { isSealed, viewExtract } from './extractViews'
import { enqueue } from '../jobs/enqueue'
import { notify } from './notices'
import { readSignedPlan } from './plans'
import { appendRecord } from './record'
import { requireSeparation } from './separation'
import { sign, type Credentials } from './signatures'
import { actorOf, type Viewer } from './viewer'

interface At { readonly studyId: StudyId, readonly extractId: ExtractId, readonly viewer: Viewer }

/** The study's row is locked first wherever several are, so that transactions wait and never block each other. */
async function lockExtract(tx: Transaction, { studyId, extractId }: At, states: readonly ExtractRow['state'][]): Promise<ExtractRow> {
  await tx.select({ id: study.id }).from(study).where(eq(study.id, studyId)).for('update')
  const [row] = await tx.select().from(extract).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId))).for('update')
  if (!row) throw new DomainError('not-found')
  if (!states.includes(row.state)) throw new DomainError('wrong-state', [{ code: `extract-${row.state}` }])
  return row
}

/** Tells which column is what; the file is then read whole, under the plan version in force when it came. */
export async function mapExtract(db: Database, { mapping, ...at }: At & { readonly mapping: ColumnMapping }) {
  const { studyId, extractId, viewer } = at
  const row = await db.transaction(tx => lockExtract(tx, at, ['awaiting-mapping']))
  const plan = await readSignedPlan(db, { studyId, planId: row.planId })
  const faults = mappingFaults(plan.document, row.columns, mapping)
  if (faults.length > 0) throw new DomainError('invalid-input', faults)
  const outcome = await accepted(db, { blobId: row.blobId, plan: plan.document, mapping, cutOff: row.cutOff })
  return db.transaction(async (tx) => {
    const { number, cutOff, purpose } = await lockExtract(tx, at, ['awaiting-mapping'])
    const values = await outcomeValues(tx, { studyId, plan, cutOff, purpose }, outcome)
    await tx.update(extract).set(values).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId)))
    if (outcome.state === 'accepted') await afterAcceptance(tx, at, outcome)
    await notify(tx, { studyId, kind: 'extract', id: extractId })
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'extract.mapped', subject: extractId,
      detail: { number, state: values.state, mapping: JSON.stringify(mapping) },
    })
    return viewExtract(tx, at)
  })
}

interface Signing extends At, Credentials { readonly reason: string }

/** Why an extract outside every window is judged; signed by a biostatistician who did not upload it. */
export function giveReason(db: Database, { identifier, password, reason, ...at }: Signing) {
  const { studyId, extractId, viewer } = at
  return db.transaction(async (tx) => {
    const { number, uploadedBy, bytesHash } = await lockExtract(tx, at, ['awaiting-reason'])
    requireSeparation('extract.give-reason', viewer.person.id, { 'extract.upload': [uploadedBy] })
    await sign(tx, { studyId, viewer, identifier, password, meaning: 'reason-given', subject: extractId, hash: bytesHash, reason })
    await tx.update(extract).set({ state: 'judging' }).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId)))
    await enqueue(tx, 'check', { studyId, extractId })
    await notify(tx, { studyId, kind: 'extract', id: extractId })
    await appendRecord(tx, { chain: { studyId }, actor: actorOf(viewer), action: 'extract.reason-given', subject: extractId, detail: { number, reason } })
    return viewExtract(tx, at)
  })
}

/** Takes an extract out of use; it stays in the ledger, marked, and releases nothing that depends on arms. */
export function withdrawExtract(db: Database, { identifier, password, reason, ...at }: Signing) {
  const { studyId, extractId, viewer } = at
  return db.transaction(async (tx) => {
    const { number, bytesHash } = await lockExtract(tx, at, ['awaiting-mapping', 'awaiting-reason', 'judging', 'checked'])
    if (await bindingExtract(tx, studyId) === extractId) throw new DomainError('wrong-state', [{ code: 'database-is-locked' }])
    await sign(tx, { studyId, viewer, identifier, password, meaning: 'withdrawn', subject: extractId, hash: bytesHash, reason })
    await tx.update(extract).set({ state: 'withdrawn' }).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId)))
    await notify(tx, { studyId, kind: 'extract', id: extractId })
    await appendRecord(tx, { chain: { studyId }, actor: actorOf(viewer), action: 'extract.withdrawn', subject: extractId, detail: { number, reason } })
    return viewExtract(tx, at)
  })
}

export interface Download { readonly fileName: string, readonly size: number, readonly bytes: AsyncIterable<Uint8Array> }

/** The bytes as received. Sealed ones are for cleared members, and having had them is exposure. */
export async function downloadExtract(db: Database, { studyId, extractId, viewer }: At): Promise<Download> {
  const [row] = await db.select().from(extract).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId)))
  if (!row) throw new DomainError('not-found')
  const { document } = await readSignedPlan(db, { studyId, planId: row.planId })
  if (document.blinding === 'blinded' && isSealed(row)) {
    if (!viewer.standing.cleared) throw new DomainError('not-permitted')
    await db.transaction(async (tx) => {
      await recordExposure(tx, { studyId, viewer, how: 'allocation', subject: extractId })
      await appendRecord(tx, { chain: { studyId }, actor: actorOf(viewer), action: 'extract.unsealed', subject: extractId, detail: { number: row.number } })
    })
  }
  return { fileName: row.fileName, size: row.size, bytes: readBlob(db, row.blobId) }
}
