import { sql } from 'drizzle-orm'
import type { Finding } from '../../shared/contract/extracts'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable } from '../database/client'
import { onlyRow } from '../database/onlyRow'
import { DomainError } from '../domainError'
import { findFault, proposeMapping, readHead, type FileHead } from '../readers/extractFile'
import { peek } from '../readers/peek'
import { findTreatmentColumn } from '../readers/treatment'
import { readBlob, putBlob, type StoredBlob } from './blobs'
import { committed } from './commitment'
import { accepted, refused, type Outcome } from './extractOutcome'
import { enterExtract, type Received } from './extractEntry'
import { rememberedMapping, viewExtract } from './extractViews'
import { planInForceAt, type SignedPlan } from './plans'
import type { Viewer } from './viewer'

export interface UploadExtract {
  readonly studyId: StudyId
  readonly fileName: string
  /** Calendar date up to which data are in the file. */
  readonly cutOff: string
  readonly purpose: 'interim' | 'database-lock'
  /** The bytes as they come in. */
  readonly source: AsyncIterable<Uint8Array>
  readonly viewer: Viewer
}

/** The plan version in force when the bytes begin to come in, by the database's clock. */
async function planNow(db: Queryable, studyId: StudyId): Promise<{ plan: SignedPlan, receivedAt: Date }> {
  const { at } = onlyRow(await db.execute<{ at: Date | string }>(sql`select now() as at`))
  const receivedAt = new Date(at)
  const plan = await planInForceAt(db, studyId, receivedAt)
  if (!plan) throw new DomainError('plan-not-signed')
  return { plan, receivedAt }
}

/** The name without folders and control characters. */
function cleanName(fileName: string): string {
  const name = fileName.split(/[\\/]/).at(-1)?.replace(/\p{Cc}/gu, '').trim().normalize('NFC') ?? ''
  if (name === '') throw new DomainError('invalid-input', [{ pointer: '/query/fileName', code: 'required' }])
  return name
}

/**
 * Whether allocation must be kept from this uploader. A file whose header nobody can read is sealed as well:
 * it could carry anything.
 */
function protects(plan: SignedPlan, { standing: { blindHolds, cleared } }: Viewer): boolean {
  return plan.document.blinding === 'blinded' && blindHolds && !cleared
}

interface Inspected { readonly blob: StoredBlob, readonly head: FileHead | null, readonly treatment: string | null, readonly commitment: string | null }

async function takeIn(db: Database, plan: SignedPlan, { source, viewer }: UploadExtract): Promise<Inspected> {
  const { head: beginning, whole, all } = await peek(source)
  const head = await readHead(beginning, whole)
  const isProtected = protects(plan, viewer)
  const treatment = isProtected && head ? findTreatmentColumn(head.header, head.sample, plan.document.arms) : null
  const sealed = treatment !== null || (isProtected && head === null)
  if (!sealed) return { blob: await putBlob(db, all), head, treatment, commitment: null }
  const { bytes, commitment } = committed(all)
  const blob = await putBlob(db, bytes, { sealed: true })
  return { blob, head, treatment, commitment: commitment() }
}

const treatmentFinding = (column: string): Finding => ({ severity: 'refuse', code: 'treatment-column', row: 1, column, params: {} })

async function unreadable(db: Database, { blob, commitment }: Inspected): Promise<Outcome> {
  const fault = await findFault(readBlob(db, blob.id)) ?? { severity: 'refuse', code: 'line-too-long', row: 1, column: null, params: {} }
  const sealed: Finding[] = commitment === null ? [] : [{ severity: 'refuse', code: 'unreadable-sealed', row: null, column: null, params: {} }]
  return refused([fault, ...sealed])
}

async function outcomeOf(db: Database, plan: SignedPlan, { studyId, cutOff }: UploadExtract, inspected: Inspected): Promise<Outcome> {
  const { head, blob, treatment } = inspected
  if (treatment !== null) return { ...refused([treatmentFinding(treatment)]), state: 'sealed' }
  if (head === null) return unreadable(db, inspected)
  const { complete, refused: faults } = proposeMapping(plan.document, head, await rememberedMapping(db, studyId))
  if (faults.length > 0) return refused(faults)
  return complete === null ? { state: 'awaiting-mapping' } : accepted(db, { blobId: blob.id, plan: plan.document, mapping: complete, cutOff })
}

/**
 * Takes in one data file. What can be told at once is told at once: a column that looks like treatment seals it,
 * a fault refuses it, ADaM names map it; else a person says which column is what. Whatever becomes of it, the
 * bytes are kept.
 *
 * @throws {DomainError} `plan-not-signed`, `too-large`, or `treatment-column` naming the column, never a value.
 */
export async function uploadExtract(db: Database, upload: UploadExtract) {
  const { studyId, cutOff, purpose, viewer } = upload
  const fileName = cleanName(upload.fileName)
  const { plan, receivedAt } = await planNow(db, studyId)
  const inspected = await takeIn(db, plan, upload)
  const received: Received = { studyId, plan, receivedAt, fileName, cutOff, purpose, viewer, ...inspected }
  const outcome = await outcomeOf(db, plan, upload, inspected)
  const extractId = await db.transaction(tx => enterExtract(tx, received, outcome))
  if (inspected.treatment !== null) throw new DomainError('treatment-column', [{ row: 1, column: inspected.treatment, code: 'treatment-column', params: { column: inspected.treatment } }])
  return viewExtract(db, { studyId, extractId, viewer })
}
