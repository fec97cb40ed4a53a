import type { ColumnMapping } from '../../shared/contract/extracts'
import type { ExtractColumns } from '../../shared/decision/columns'
import type { Plan } from '../../shared/plan/schema'
import { TextCells } from './cellText'
import type { CsvRow } from './csv'
import { DateColumn } from './dateColumn'
import { FindingList, quoted } from './findings'
import { IdSpelling } from './idSpelling'
import { readNumber } from './numbers'
import { subjectKey } from './subjectKey'
import { unitReader } from './units'

/** One mapped column: where it stands in the file. */
interface Source { readonly name: string, readonly index: number }

const sourceIn = (header: readonly string[], name: string): Source => ({ name, index: header.indexOf(name) })

type TextRole = 'parameter' | 'visit' | 'unit' | 'site' | 'imputed' | 'arm'
const TEXT_ROLES: readonly TextRole[] = ['parameter', 'visit', 'unit', 'site', 'imputed', 'arm']

/**
 * Builds typed columns row by row and notes what is wrong. Rows are never left out or repaired: a file is
 * accepted whole or refused.
 */
export class ColumnsBuilder {
  readonly findings = new FindingList()
  readonly #plan: Plan
  readonly #header: readonly string[]
  readonly #subject: readonly Source[]
  readonly #value: Source
  readonly #baseline: Source | null
  readonly #texts: readonly (Source & { readonly role: TextRole, readonly cells: string[] })[]
  readonly #flags: readonly (Source & { readonly flag: string, readonly cells: string[] })[]
  readonly #dates: DateColumn
  readonly #cells = new TextCells()
  readonly #spelling = new IdSpelling()
  readonly #arms: ReadonlyMap<string, string>
  readonly #armOf = new Map<string, string>()
  readonly #sourceRow: number[] = []
  readonly #subjects: string[] = []
  readonly #values: number[] = []
  readonly #baselines: number[] = []

  /** @param cutOff calendar date up to which data should be in the file, or null when it is not known. */
  constructor(plan: Plan, header: readonly string[], mapping: ColumnMapping, cutOff: string | null) {
    this.#plan = plan
    this.#header = header
    this.#subject = mapping.subject.map(name => sourceIn(header, name))
    this.#value = sourceIn(header, mapping.value)
    this.#baseline = mapping.baseline === null ? null : sourceIn(header, mapping.baseline)
    this.#texts = TEXT_ROLES.flatMap((role) => {
      const name = mapping[role]
      return name === null ? [] : [{ ...sourceIn(header, name), role, cells: [] }]
    })
    this.#flags = Object.entries(mapping.flags).map(([flag, name]) => ({ ...sourceIn(header, name), flag, cells: [] }))
    this.#dates = new DateColumn(header, cutOff)
    this.#arms = new Map(plan.arms.flatMap(({ id, label }) => [[label, id], [id, id]] as const))
  }

  add({ row, cells }: CsvRow): void {
    if (cells.length !== this.#header.length) {
      return this.findings.add('refuse', 'row-width', { row }, { cells: cells.length, columns: this.#header.length })
    }
    const subject = this.#readSubject(row, cells)
    this.#dates.check(row, cells, this.findings)
    this.#sourceRow.push(row)
    this.#subjects.push(subject)
    this.#values.push(this.#readNumber(row, this.#value, cells))
    if (this.#baseline) this.#baselines.push(this.#readNumber(row, this.#baseline, cells))
    for (const column of this.#texts) {
      const text = this.#readText(row, column, cells)
      column.cells.push(column.role === 'arm' ? this.#readArm(row, column, text, subject) : text)
    }
    for (const column of this.#flags) column.cells.push(this.#readText(row, column, cells))
  }

  /** What was read; null when the file is refused. */
  finish(): { readonly columns: ExtractColumns | null, readonly rows: number, readonly subjects: number } {
    const rows = this.#sourceRow.length
    if (rows === 0 && !this.findings.refused) this.findings.add('refuse', 'header-only', { row: 1 })
    this.#spelling.finish(this.#subject[0]?.name ?? null, this.findings)
    const columns = this.findings.refused ? null : this.#columns(rows)
    if (columns) this.#warnAboutAbsent(columns)
    return { columns, rows, subjects: this.#spelling.size }
  }

  #columns(rows: number): ExtractColumns {
    const text = (role: TextRole) => this.#texts.find(column => column.role === role)?.cells ?? null
    const unit = text('unit')
    return {
      rows,
      sourceRow: Uint32Array.from(this.#sourceRow),
      subject: this.#subjects,
      parameter: text('parameter'),
      visit: text('visit'),
      value: Float64Array.from(this.#values),
      baseline: this.#baseline ? Float64Array.from(this.#baselines) : null,
      unit: unit === null ? this.#subjects.map(() => '') : unit.map(unitReader(this.#plan)),
      site: text('site'),
      imputed: text('imputed'),
      arm: text('arm'),
      flags: Object.fromEntries(this.#flags.map(({ flag, cells }) => [flag, cells])),
    }
  }

  #readSubject(row: number, cells: readonly string[]): string {
    const parts = this.#subject.map((source) => {
      const cell = cells[source.index] ?? ''
      const text = this.#readText(row, source, cells)
      if (text === '') this.findings.add('refuse', 'subject-missing', { row, column: source.name })
      else if (this.#cells.of(cell).oddBlanks) this.findings.add('warn', 'id-blanks', { row, column: source.name }, { id: quoted(cell) })
      return text
    })
    const subject = subjectKey(parts)
    this.#spelling.add(subject, row, this.#subject[0]?.name ?? null, this.findings)
    return subject
  }

  #readNumber(row: number, { name, index }: Source, cells: readonly string[]): number {
    const cell = cells[index] ?? ''
    const reading = readNumber(cell)
    if (reading.kind === 'number') return reading.value
    if (reading.kind === 'not-a-number') {
      this.findings.add('refuse', 'not-a-number', { row, column: name }, { text: quoted(cell), looks: reading.looks })
    }
    return Number.NaN
  }

  #readText(row: number, { name, index }: Source, cells: readonly string[]): string {
    const cell = cells[index] ?? ''
    const { text, control, formula } = this.#cells.of(cell)
    if (control) this.findings.add('warn', 'control-character', { row, column: name })
    if (formula) this.findings.add('warn', 'formula', { row, column: name }, { text: quoted(cell) })
    return text
  }

  #readArm(row: number, { name }: Source, text: string, subject: string): string {
    if (text === '') return ''
    const arm = this.#arms.get(text)
    if (arm === undefined) {
      this.findings.add('refuse', 'unknown-arm', { row, column: name }, { text: quoted(text) })
      return ''
    }
    const earlier = this.#armOf.get(subject)
    if (earlier === undefined) this.#armOf.set(subject, arm)
    else if (earlier !== arm) this.findings.add('refuse', 'subject-two-arms', { row, column: name }, { subject: quoted(subject) })
    return arm
  }

  /** Endpoints of the plan of which the file has no row. */
  #warnAboutAbsent({ parameter }: ExtractColumns): void {
    const present = new Set(parameter ?? this.#plan.endpoints.map(({ id }) => id))
    const column = this.#texts.find(({ role }) => role === 'parameter')?.name ?? null
    for (const { id } of this.#plan.endpoints.filter(({ id }) => !present.has(id))) {
      this.findings.add('warn', 'endpoint-absent', { column }, { endpoint: id })
    }
  }
}
