import type { Allocation } from '../../shared/decision/columns'
import type { Plan } from '../../shared/plan/schema'
import { openCsv, type CsvFile, type CsvRow } from './csv'
import { FindingList, quoted, UnreadableFile, type FindingCode, type FindingSummary } from './findings'
import { subjectKey } from './subjectKey'

/** One subject of the list; arms are the plan's codes. */
export interface AllocatedSubject {
  readonly subject: string
  readonly planned: string
  /** What was actually given, where the list says so. */
  readonly actual: string | null
  readonly stratum: string | null
}

export interface AllocationReading {
  /** Empty unless the list is without refusing findings. */
  readonly subjects: readonly AllocatedSubject[]
  readonly findings: FindingSummary
}

interface Columns { readonly subject: readonly number[], readonly planned: number, readonly actual: number | null, readonly stratum: number | null }

const NAMES = {
  planned: ['TRT01P', 'TRTP', 'ARMCD', 'ARM', 'PLANNED', 'PLANNED ARM', 'PLANNED_ARM'],
  actual: ['TRT01A', 'TRTA', 'ACTARMCD', 'ACTARM', 'ACTUAL', 'ACTUAL ARM', 'ACTUAL_ARM'],
  stratum: ['STRATUM', 'STRATA', 'STRATA1', 'STRAT1R', 'STRATUM1'],
} as const

type ArmOf = (cell: string) => string | null

/** Arms by code or label, exactly as registered: no spelling is silently taken for another. */
function armReader(plan: Plan): ArmOf {
  const arms = new Map(plan.arms.flatMap(({ id, label }) => [[label, id], [id, id]] as const))
  return cell => arms.get(cell) ?? null
}

/** Of several columns that may carry the arm, the first whose cell in the first row is one. */
function pick(header: readonly string[], names: readonly string[], first: readonly string[], armOf: ArmOf): number | null {
  const candidates = names.map(name => header.findIndex(column => column.toUpperCase() === name)).filter(at => at >= 0)
  return candidates.find(at => armOf(first[at] ?? '') !== null) ?? candidates[0] ?? null
}

function findColumns(header: readonly string[], first: readonly string[], subjectColumns: readonly string[], armOf: ArmOf): Columns {
  const at = (name: string) => header.findIndex(column => column.toUpperCase() === name.toUpperCase())
  const mapped = subjectColumns.map(at)
  const subject = mapped.length > 0 && mapped.every(index => index >= 0) ? mapped : [['USUBJID', 'SUBJID', 'SUBJECT'].map(at).find(index => index >= 0) ?? -1]
  if (subject.includes(-1)) throw new UnreadableFile('column-missing', { row: 1, column: subjectColumns[0] ?? 'USUBJID' })
  const planned = pick(header, NAMES.planned, first, armOf)
  if (planned === null) throw new UnreadableFile('column-missing', { row: 1, column: 'TRT01P' })
  const stratum = NAMES.stratum.map(at).find(index => index >= 0) ?? null
  return { subject, planned, actual: pick(header, NAMES.actual, first, armOf), stratum }
}

/** Collects the subjects of a list row by row and notes what is wrong with each. */
class AllocationRows {
  readonly findings = new FindingList()
  readonly #rows = new Map<string, { row: number, entry: AllocatedSubject }>()
  readonly #header: readonly string[]
  readonly #columns: Columns
  readonly #armOf: ArmOf

  constructor(header: readonly string[], columns: Columns, armOf: ArmOf) {
    this.#header = header
    this.#columns = columns
    this.#armOf = armOf
  }

  add({ row, cells }: CsvRow): void {
    if (cells.length !== this.#header.length) {
      return this.findings.add('refuse', 'row-width', { row }, { cells: cells.length, columns: this.#header.length })
    }
    const entry = this.#read(row, cells)
    if (entry === null) return
    const earlier = this.#rows.get(entry.subject)
    if (earlier) this.findings.add('refuse', 'subject-twice', { row, column: this.#nameOf(this.#columns.subject[0]) }, { subject: quoted(entry.subject), first: earlier.row })
    else this.#rows.set(entry.subject, { row, entry })
  }

  subjects(): readonly AllocatedSubject[] {
    return [...this.#rows.values()].map(({ entry }) => entry)
  }

  #nameOf = (index: number | undefined) => this.#header[index ?? 0] ?? null

  #read(row: number, cells: readonly string[]): AllocatedSubject | null {
    const { subject, planned, actual, stratum } = this.#columns
    const parts = subject.map(index => cells[index] ?? '')
    if (parts.some(part => part.trim() === '')) {
      this.findings.add('refuse', 'subject-missing', { row, column: this.#nameOf(subject[0]) })
      return null
    }
    const plannedArm = this.#arm(row, planned, cells, 'arm-missing')
    const actualArm = actual === null ? null : this.#arm(row, actual, cells, null)
    if (plannedArm === null) return null
    return { subject: subjectKey(parts), planned: plannedArm, actual: actualArm, stratum: stratum === null ? null : cells[stratum] || null }
  }

  #arm(row: number, index: number, cells: readonly string[], whenEmpty: FindingCode | null): string | null {
    const cell = cells[index] ?? ''
    const arm = this.#armOf(cell)
    if (arm === null && cell !== '') this.findings.add('refuse', 'unknown-arm', { row, column: this.#nameOf(index) }, { text: quoted(cell) })
    if (arm === null && cell === '' && whenEmpty !== null) this.findings.add('refuse', whenEmpty, { row, column: this.#nameOf(index) })
    return arm
  }
}

async function collect({ header, rows }: CsvFile, subjectColumns: readonly string[], armOf: ArmOf): Promise<AllocationReading> {
  let list: AllocationRows | null = null
  for await (const row of rows) {
    list ??= new AllocationRows(header, findColumns(header, row.cells, subjectColumns, armOf), armOf)
    list.add(row)
  }
  if (list === null) throw new UnreadableFile('header-only', { row: 1 })
  return { subjects: list.findings.refused ? [] : list.subjects(), findings: list.findings.summary() }
}

/**
 * Reads an allocation list: subject, planned arm and, where there are such columns, actual arm and stratum.
 * Arms stand there by code or label as registered. Findings quote what stands in the list: they are for cleared
 * members only.
 *
 * @param subjectColumns the columns that make a subject's id in this study's extracts; empty when unknown.
 */
export async function readAllocation(source: AsyncIterable<Uint8Array>, plan: Plan, subjectColumns: readonly string[] = []): Promise<AllocationReading> {
  try {
    return await collect(await openCsv(source), subjectColumns, armReader(plan))
  }
  catch (error) {
    if (!(error instanceof UnreadableFile)) throw error
    return { subjects: [], findings: { list: [error.finding], counts: { refuse: 1, hold: 0, warn: 0 } } }
  }
}

/** The planned arm by subject: what the judge joins to an extract. Only own keys are looked up. */
export const plannedArms = (subjects: readonly AllocatedSubject[]): Allocation =>
  Object.fromEntries(subjects.map(({ subject, planned }) => [subject, planned]))
