import type { PlannedAnalysis } from '../plan/analysisSchema'
import type { Endpoint, Plan } from '../plan/schema'
import { type ScreenKind, STANDING_SCREENS, type StandingScreen } from '../plan/terms'
import type { ExtractColumns } from './columns'
import { type ExtractIndex, indexExtract, rowFilter } from './extractIndex'
import type { ScreenReport } from './report'
import { selectedRows } from './select'

/** What was decided in writing about data queries, by `queryKey`; one that is not named is open. */
export type Resolutions = Readonly<Record<string, 'open' | 'cleared' | 'overruled'>>

export interface ActingScreen {
  readonly id: string
  readonly kind: ScreenKind | StandingScreen
  readonly action: 'hold' | 'warn'
}

/** One screen that found something in one endpoint, knowing no arms. */
export interface ScreenFinding extends Omit<ScreenReport, 'query'> {
  /** False for two values under one key: nothing can be said in writing that makes one of them the value. */
  readonly clearable: boolean
}

/** A finding with every row index it touches. */
export interface ScreenHit { readonly screen: ActingScreen, readonly endpoint: string, readonly rows: readonly number[] }

const ROWS_KEPT = 200

/** Where a plan is silent: what makes a verdict meaningless holds, what is only unlikely is told. */
const DEFAULTS: readonly ActingScreen[] = [
  { id: 'impossible-value', kind: 'impossible-value', action: 'hold' },
  { id: 'duplicate-key', kind: 'duplicate-key', action: 'hold' },
  { id: 'implausible-value', kind: 'implausible-value', action: 'warn' },
]

/** The screens that act under a plan: its own, the defaults of kinds it leaves out, and the standing ones. */
export function actingScreens(plan: Plan): ActingScreen[] {
  const missing = DEFAULTS.filter(({ kind }) => !plan.screens.some(screen => screen.kind === kind))
  return [...plan.screens, ...missing, ...STANDING_SCREENS.map((kind): ActingScreen => ({ id: kind, kind, action: 'hold' }))]
}

export const queryKey = (screen: string, endpoint: string): string => `${screen}/${endpoint}`

const outside = (value: number, { min, max }: Endpoint['possible']) => (min !== null && value < min) || (max !== null && value > max)

/** Rows of an endpoint whose value, or the baseline it is derived from, lies outside a range. */
function rowsOutside(endpoint: Endpoint, range: Endpoint['possible'], columns: ExtractColumns, rows: readonly number[]): number[] {
  const baseline = endpoint.derivation === 'none' ? null : columns.baseline
  return rows.filter(row => outside(columns.value[row] ?? Number.NaN, range) || outside(baseline?.[row] ?? Number.NaN, range))
}

/** Rows that share subject and visit with another one of the same analysis. */
function rowsRepeated(plan: Plan, endpoint: Endpoint, index: ExtractIndex): number[] {
  const { subject, visit } = index.columns
  const found = new Set<number>()
  for (const analysis of plan.analyses.filter(each => each.endpoint === endpoint.id)) {
    const firstRow = new Map<string, number>()
    for (const row of selectedRows(plan, analysis, index)) {
      const key = JSON.stringify([subject[row], visit?.[row] ?? null])
      const earlier = firstRow.get(key)
      if (earlier === undefined) firstRow.set(key, row)
      else found.add(earlier).add(row)
    }
  }
  return [...found].sort((a, b) => a - b)
}

function rowsFound(plan: Plan, kind: ActingScreen['kind'], endpoint: Endpoint, index: ExtractIndex): readonly number[] {
  const { columns } = index
  const rows = index.rowsOf.get(endpoint.id) ?? []
  switch (kind) {
    case 'impossible-value': return rowsOutside(endpoint, endpoint.possible, columns, rows)
    case 'implausible-value': return rowsOutside(endpoint, endpoint.plausible, columns, rows)
    case 'duplicate-key': return rowsRepeated(plan, endpoint, index)
    case 'wrong-unit': return rows.filter(row => !Number.isNaN(columns.value[row]) && columns.unit?.[row] !== endpoint.unit)
    case 'unknown-visit': return columns.visit === null ? [] : rows.filter(row => !plan.visits.some(({ id }) => id === columns.visit?.[row]))
  }
}

/** Every screen over every endpoint; only what found something. */
export function screenRows(plan: Plan, index: ExtractIndex): ScreenHit[] {
  return plan.endpoints.flatMap(endpoint => actingScreens(plan)
    .map(screen => ({ screen, endpoint: endpoint.id, rows: rowsFound(plan, screen.kind, endpoint, index) }))
    .filter(({ rows }) => rows.length > 0))
}

function findingOf({ screen, endpoint, rows }: ScreenHit, { sourceRow }: ExtractColumns): ScreenFinding {
  return {
    screen: screen.id, kind: screen.kind, action: screen.action, endpoint,
    rows: rows.slice(0, ROWS_KEPT).map(row => sourceRow[row] ?? 0), count: rows.length,
    clearable: screen.kind !== 'duplicate-key',
  }
}

/** The arm-free look for data causes that every received extract gets, judged or not. */
export function screenExtract(plan: Plan, columns: ExtractColumns): ScreenFinding[] {
  return screenRows(plan, indexExtract(plan, columns)).map(hit => findingOf(hit, columns))
}

/** Where the query of a held screen stands; null for one that only warns. */
function queryState({ action, clearable, screen, endpoint }: ScreenFinding, resolutions: Resolutions): ScreenReport['query'] {
  if (action === 'warn') return null
  const key = queryKey(screen, endpoint)
  return clearable && Object.hasOwn(resolutions, key) ? resolutions[key] ?? 'open' : 'open'
}

export function screenReport(hit: ScreenHit, columns: ExtractColumns, resolutions: Resolutions): ScreenReport {
  const finding = findingOf(hit, columns)
  const { screen, kind, action, endpoint, rows, count } = finding
  return { screen, kind, action, endpoint, rows, count, query: queryState(finding, resolutions) }
}

/** Whether a hit concerns an analysis: by endpoint, set and record selection, and by visit where the visit is one of the plan's. */
export function touches(plan: Plan, analysis: PlannedAnalysis, { screen, endpoint, rows }: ScreenHit, columns: ExtractColumns, selected: ReadonlySet<number>): boolean {
  if (endpoint !== analysis.endpoint) return false
  if (screen.kind !== 'unknown-visit') return rows.some(row => selected.has(row))
  const { inSet, flagged } = rowFilter(plan, analysis, columns)
  return rows.some(row => inSet(row) && flagged(row))
}
