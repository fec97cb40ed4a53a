import { setImmediate } from 'node:timers/promises'
import type { ColumnMapping, Finding } from '../../shared/contract/extracts'
import type { ExtractColumns } from '../../shared/decision/columns'
import type { Plan } from '../../shared/plan/schema'
import { ColumnsBuilder } from './columns'
import { openCsv, type CsvFile, type Delimiter } from './csv'
import type { FindingList, FindingSummary } from './findings'
import { UnreadableFile } from './findings'
import { completeMapping, headerFaults, suggestMapping, type SuggestedMapping } from './mapping'

/** Rows shown before a mapping is confirmed. */
const PREVIEW_ROWS = 20
/** Between so many rows others get their turn: rows that are there already would be read without a pause. */
const ROWS_AT_ONCE = 2048
/** Rows looked at to tell what a column holds. */
const SAMPLE_ROWS = 2000

export interface FileHead {
  readonly header: readonly string[]
  readonly delimiter: Delimiter
  /** The first rows as they stand, without the header; as many as the beginning of the file holds. */
  readonly sample: readonly (readonly string[])[]
  /** The few of them that are shown to a person. */
  readonly preview: readonly (readonly string[])[]
}

async function firstRows({ rows }: CsvFile): Promise<string[][]> {
  const taken: string[][] = []
  try {
    for await (const { cells } of rows) {
      taken.push([...cells])
      if (taken.length === SAMPLE_ROWS) break
    }
  }
  catch (error) {
    if (!(error instanceof UnreadableFile)) throw error // found again, with its place, when the file is read whole
  }
  return taken
}

async function* only(bytes: Uint8Array): AsyncGenerator<Uint8Array> {
  yield bytes
}

/**
 * Header and first rows from the beginning of a file.
 *
 * @param bytes the beginning; a line that is cut off at its end is left out when `whole` is false.
 * @returns null when not even the header can be read; reading the whole file says why.
 */
export async function readHead(bytes: Uint8Array, whole: boolean): Promise<FileHead | null> {
  const lines = whole ? bytes : bytes.subarray(0, bytes.lastIndexOf(0x0A) + 1)
  try {
    const file = await openCsv(only(lines))
    const sample = await firstRows(file)
    return { header: file.header, delimiter: file.delimiter, sample, preview: sample.slice(0, PREVIEW_ROWS) }
  }
  catch (error) {
    if (!(error instanceof UnreadableFile)) throw error
    return null
  }
}

export interface MappingProposal {
  readonly suggested: SuggestedMapping
  /** The mapping, when nothing is left for a person to decide. */
  readonly complete: ColumnMapping | null
  /** Why a file that plainly follows ADaM cannot be mapped at all. */
  readonly refused: readonly Finding[]
}

/** What the header and first rows tell about which column is what. */
export function proposeMapping(plan: Plan, { header, sample }: Pick<FileHead, 'header' | 'sample'>, remembered: ColumnMapping | null): MappingProposal {
  const suggested = suggestMapping(plan, header, sample, remembered)
  const refused = headerFaults(plan, header, suggested)
    .map(({ code, column }): Finding => ({ severity: 'refuse', code, row: 1, column, params: {} }))
  return { suggested, complete: refused.length > 0 ? null : completeMapping(plan, suggested), refused }
}

export interface ExtractReading {
  /** Null when the file is refused. */
  readonly columns: ExtractColumns | null
  readonly rows: number
  readonly subjects: number
  readonly findings: FindingSummary
}

const refusedUnread = (finding: Finding, soFar?: FindingSummary): FindingSummary => ({
  list: [finding, ...soFar?.list ?? []],
  counts: { refuse: (soFar?.counts.refuse ?? 0) + 1, hold: soFar?.counts.hold ?? 0, warn: soFar?.counts.warn ?? 0 },
})

/**
 * Reads a CSV extract whole, once it is known which column is what.
 *
 * @param mapping a mapping without faults for this file's header (`mappingFaults`).
 * @param cutOff calendar date up to which data should be in the file, or null when it is not known.
 * @returns typed columns, or none with the findings that refuse the file. Every finding names row and column.
 */
export async function readCsvExtract(source: AsyncIterable<Uint8Array>, plan: Plan, mapping: ColumnMapping, cutOff: string | null = null): Promise<ExtractReading> {
  let builder: ColumnsBuilder | null = null
  try {
    const file = await openCsv(source)
    builder = new ColumnsBuilder(plan, file.header, mapping, cutOff)
    noteFormat(file, mapping, builder.findings)
    for await (const row of file.rows) {
      builder.add(row)
      if (row.row % ROWS_AT_ONCE === 0) await setImmediate()
    }
    return { ...builder.finish(), findings: builder.findings.summary() }
  }
  catch (error) {
    if (!(error instanceof UnreadableFile)) throw error
    return { columns: null, rows: 0, subjects: 0, findings: refusedUnread(error.finding, builder?.findings.summary()) }
  }
}

/** States what was recognised where it is not the plain case. */
function noteFormat({ delimiter }: CsvFile, { unit }: ColumnMapping, findings: FindingList): void {
  if (delimiter !== 'comma') findings.add('warn', `separator-${delimiter}`, { row: 1 })
  if (unit === null) findings.add('warn', 'no-unit-column', { row: 1 })
}

/**
 * Reads a file of which not even the header could be made out, to say where it fails.
 *
 * @returns the finding, or null when the file can be read after all.
 */
export async function findFault(source: AsyncIterable<Uint8Array>): Promise<Finding | null> {
  try {
    const { rows } = await openCsv(source)
    for await (const _ of rows) continue
    return null
  }
  catch (error) {
    if (!(error instanceof UnreadableFile)) throw error
    return error.finding
  }
}
