import type { ColumnMapping, Finding } from '../../shared/contract/extracts'
import type { Plan } from '../../shared/plan/schema'
import type { Database } from '../database/client'
import { readCsvExtract } from '../readers/extractFile'
import type { FindingSummary } from '../readers/findings'
import { encodeColumns } from '../readers/storedColumns'
import { putBlob, readBlob } from './blobs'

/** What becomes of a file once it is looked at. */
export type Outcome
  = | { readonly state: 'sealed' | 'refused', readonly findings: FindingSummary, readonly mapping: ColumnMapping | null }
    | { readonly state: 'awaiting-mapping' }
    | Accepted

export interface Accepted {
  readonly state: 'accepted'
  readonly findings: FindingSummary
  readonly mapping: ColumnMapping
  readonly columnsBlobId: string
  readonly rows: number
  readonly subjects: number
}

export const refused = (findings: readonly Finding[]): Extract<Outcome, { state: 'sealed' | 'refused' }> =>
  ({ state: 'refused', mapping: null, findings: { list: findings, counts: { refuse: findings.length, hold: 0, warn: 0 } } })

interface Reading { readonly blobId: string, readonly plan: Plan, readonly mapping: ColumnMapping, readonly cutOff: string }

/** Reads a file whole by its mapping. The columns of an accepted one are stored in binary form. */
export async function accepted(db: Database, { blobId, plan, mapping, cutOff }: Reading): Promise<Outcome> {
  const { columns, rows, subjects, findings } = await readCsvExtract(readBlob(db, blobId), plan, mapping, cutOff)
  if (columns === null) return { state: 'refused', findings, mapping }
  const { id: columnsBlobId } = await putBlob(db, encodeColumns(columns))
  return { state: 'accepted', findings, mapping, columnsBlobId, rows, subjects }
}
