import type { PlannedAnalysis } from '../plan/analysisSchema'
import type { Plan } from '../plan/schema'
import type { ExtractColumns } from './columns'

/** What several analyses ask of the same extract, gathered in one pass each. */
export interface ExtractIndex {
  readonly columns: ExtractColumns
  /** Row indices of each endpoint, in file order. */
  readonly rowsOf: ReadonlyMap<string, readonly number[]>
  /** Subjects with any row in the set, by analysis set. */
  readonly members: ReadonlyMap<string, ReadonlySet<string>>
}

/** The flag column a plan names; the reader refuses a file without it, so its absence is a programming error. */
export function flagColumn(columns: ExtractColumns, name: string): readonly string[] {
  const flags = Object.hasOwn(columns.flags, name) ? columns.flags[name] : undefined
  if (flags === undefined) throw new RangeError(`no column ${name} among the flags`)
  return flags
}

function gatherRows({ endpoints }: Plan, { rows, parameter }: ExtractColumns): Map<string, number[]> {
  const rowsOf = new Map<string, number[]>(endpoints.map(({ id }) => [id, []]))
  const only = endpoints[0]?.id ?? ''
  for (let row = 0; row < rows; row++) rowsOf.get(parameter === null ? only : parameter[row] ?? '')?.push(row)
  return rowsOf
}

function gatherMembers({ analyses, analysisSets }: Plan, columns: ExtractColumns): Map<string, Set<string>> {
  const used = analysisSets.filter(({ id }) => analyses.some(({ analysisSet }) => analysisSet === id))
  return new Map(used.map(({ id, column, value }) => {
    const flags = flagColumn(columns, column)
    return [id, new Set(columns.subject.filter((_, row) => flags[row] === value))]
  }))
}

export function indexExtract(plan: Plan, columns: ExtractColumns): ExtractIndex {
  return { columns, rowsOf: gatherRows(plan, columns), members: gatherMembers(plan, columns) }
}

/** A set whose column is blank on every row has not been determined yet. */
export function setDetermined(plan: Plan, { columns }: ExtractIndex, setId: string): boolean {
  const set = plan.analysisSets.find(({ id }) => id === setId)
  return set !== undefined && flagColumn(columns, set.column).some(text => text !== '')
}

/** Whether a row of any visit belongs to the analysis: its set, and its record selection where there is one. */
export function rowFilter(plan: Plan, analysis: PlannedAnalysis, columns: ExtractColumns) {
  const set = plan.analysisSets.find(({ id }) => id === analysis.analysisSet)
  const setFlags = set === undefined ? null : flagColumn(columns, set.column)
  const { recordSelection } = analysis
  const recordFlags = recordSelection === null ? null : flagColumn(columns, recordSelection.column)
  return {
    inSet: (row: number) => setFlags?.[row] === set?.value,
    flagged: (row: number) => recordFlags === null || recordFlags[row] === recordSelection?.value,
  }
}
