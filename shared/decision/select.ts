import type { Comparison, PlannedAnalysis } from '../plan/analysisSchema'
import type { Endpoint, Plan } from '../plan/schema'
import type { ExtractColumns } from './columns'
import { type ExtractIndex, rowFilter } from './extractIndex'
import type { SelectionReport } from './report'

type DropReason = SelectionReport['dropped'][number]['reason']

/** One subject's value at one visit, as it stands in the file. */
interface Observation { readonly row: number, readonly value: number, readonly baseline: number }

/** What an analysis is judged on, arm-free: usable subjects by id, values before derivation and transformation. */
export interface Selection {
  readonly report: SelectionReport
  /** Rows of the analysis' set, visits, parameter and record selection, usable or not. */
  readonly rows: readonly number[]
  /** Usable subjects, sorted, so that the order of rows changes no figure. */
  readonly subjects: readonly string[]
  /** The value that counts (of two occasions the second), one per usable subject. */
  readonly value: Float64Array
  /** Its baseline; null unless the endpoint is derived from it. */
  readonly baseline: Float64Array | null
  /** Value and baseline at the first of two occasions. */
  readonly first: Float64Array | null
  readonly firstBaseline: Float64Array | null
  /** Subjects who should have a value. */
  readonly expected: readonly string[]
}

const visitsOf = (comparison: Comparison): readonly string[] =>
  comparison.kind === 'occasions' ? [comparison.first, comparison.second] : [comparison.visit]

/** Why a selected row gives no value; null when it gives one. */
function faultOf(endpoint: Endpoint, { value, baseline }: Observation): DropReason | null {
  if (Number.isNaN(value)) return 'no-value'
  if (endpoint.derivation === 'none') return null
  if (Number.isNaN(baseline)) return 'no-baseline'
  return endpoint.derivation === 'percent-change' && baseline === 0 ? 'zero-baseline' : null
}

class Tally {
  readonly #counts = new Map<DropReason, number>()
  add(reason: DropReason, count = 1): void {
    if (count > 0) this.#counts.set(reason, (this.#counts.get(reason) ?? 0) + count)
  }

  list(): SelectionReport['dropped'] {
    return [...this.#counts].map(([reason, count]) => ({ reason, count }))
  }
}

/** The rows of the set, the visits and the record selection, by visit. */
function pickRows(plan: Plan, analysis: PlannedAnalysis, index: ExtractIndex, tally: Tally): number[][] {
  const { columns, rowsOf } = index
  const ofEndpoint = rowsOf.get(analysis.endpoint) ?? []
  tally.add('other-parameter', columns.rows - ofEndpoint.length)
  const visits = visitsOf(analysis.comparison)
  const { inSet, flagged } = rowFilter(plan, analysis, columns)
  const picked = visits.map((): number[] => [])
  for (const row of ofEndpoint) {
    const slot = columns.visit === null ? 0 : visits.indexOf(columns.visit[row] ?? '')
    if (slot < 0) tally.add('other-visit')
    else if (!inSet(row)) tally.add('not-in-set')
    else if (!flagged(row)) tally.add('not-flagged')
    else picked[slot]?.push(row)
  }
  return picked
}

/** Rows of an analysis by set, visits, parameter and record selection, usable or not. */
export function selectedRows(plan: Plan, analysis: PlannedAnalysis, index: ExtractIndex): number[] {
  return pickRows(plan, analysis, index, new Tally()).flat()
}

/** Usable observations by subject; of two under one key the first, as the analysis is held then anyway. */
function observe(columns: ExtractColumns, endpoint: Endpoint, rows: readonly number[], tally: Tally): { bySubject: Map<string, Observation>, usable: number[] } {
  const bySubject = new Map<string, Observation>()
  const usable: number[] = []
  for (const row of rows) {
    const observation = { row, value: columns.value[row] ?? Number.NaN, baseline: columns.baseline?.[row] ?? Number.NaN }
    const fault = faultOf(endpoint, observation)
    if (fault !== null) tally.add(fault)
    else {
      const subject = columns.subject[row] ?? ''
      if (!bySubject.has(subject)) bySubject.set(subject, observation)
      usable.push(row)
    }
  }
  return { bySubject, usable }
}

const byCodeUnits = (a: string, b: string) => (a < b ? -1 : a > b ? 1 : 0)

/** Subjects of the set who should have a value: at the decision point all, before it those seen at the visit. */
function expectedSubjects(analysis: PlannedAnalysis, { columns, members }: ExtractIndex, rows: readonly number[], atDecisionPoint: boolean): string[] {
  const subjects = atDecisionPoint ? members.get(analysis.analysisSet) ?? [] : new Set(rows.map(row => columns.subject[row] ?? ''))
  return [...subjects].sort(byCodeUnits)
}

/**
 * Picks the rows and values of one planned analysis and counts what was dropped and why, knowing no arms.
 *
 * @param atDecisionPoint whether every subject of the set should have a value, seen at the visit or not.
 */
export function select(plan: Plan, analysis: PlannedAnalysis, index: ExtractIndex, atDecisionPoint: boolean): Selection {
  const { columns } = index
  const endpoint = plan.endpoints.find(({ id }) => id === analysis.endpoint)
  if (endpoint === undefined) throw new RangeError(`no endpoint ${analysis.endpoint} in the plan`)
  const tally = new Tally()
  const picked = pickRows(plan, analysis, index, tally)
  const observed = picked.map(rows => observe(columns, endpoint, rows, tally))
  const last = observed[observed.length - 1]?.bySubject ?? new Map<string, Observation>()
  const first = analysis.comparison.kind === 'occasions' ? observed[0]?.bySubject ?? null : null
  const subjects = [...last.keys()].filter(subject => first === null || first.has(subject)).sort(byCodeUnits)
  const paired = new Set(subjects)
  const usable = observed.flatMap(visit => visit.usable)
  const kept = usable.filter(row => paired.has(columns.subject[row] ?? ''))
  tally.add('other-occasion-missing', usable.length - kept.length)
  const rows = picked.flat()
  const expected = expectedSubjects(analysis, index, rows, atDecisionPoint)
  const take = (from: Map<string, Observation>, field: 'value' | 'baseline') => Float64Array.from(subjects, subject => from.get(subject)?.[field] ?? Number.NaN)
  const derived = endpoint.derivation !== 'none'
  return {
    report: {
      rows: columns.rows, kept: kept.length, dropped: tally.list(),
      imputed: kept.filter(row => (columns.imputed?.[row] ?? '') !== '').length,
      expected: expected.length, usable: subjects.length,
    },
    rows, subjects, expected,
    value: take(last, 'value'),
    baseline: derived ? take(last, 'baseline') : null,
    first: first === null ? null : take(first, 'value'),
    firstBaseline: first === null || !derived ? null : take(first, 'baseline'),
  }
}
