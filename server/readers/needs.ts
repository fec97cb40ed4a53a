import type { Plan } from '../../shared/plan/schema'

/** What a plan asks of the columns of a file. */
export interface ColumnNeeds {
  /** With a single endpoint a file may do without a parameter column; likewise with a single visit. */
  readonly parameter: boolean
  readonly visit: boolean
  readonly baseline: boolean
  /** The extract of an open-label study carries the arm. */
  readonly arm: boolean
  /** Columns that analysis sets and record selections name. */
  readonly flags: readonly string[]
}

export function columnNeeds(plan: Plan): ColumnNeeds {
  const derivations = new Map(plan.endpoints.map(({ id, derivation }) => [id, derivation]))
  const usedSets = new Set(plan.analyses.map(({ analysisSet }) => analysisSet))
  const flags = [
    ...plan.analysisSets.filter(({ id }) => usedSets.has(id)).map(({ column }) => column),
    ...plan.analyses.flatMap(({ recordSelection }) => recordSelection ? [recordSelection.column] : []),
  ]
  return {
    parameter: plan.endpoints.length > 1,
    visit: plan.visits.length > 1,
    baseline: plan.analyses.some(({ endpoint }) => derivations.get(endpoint) !== 'none'),
    arm: plan.blinding === 'open-label' && plan.analyses.some(({ comparison }) => comparison.kind === 'arms'),
    flags: [...new Set(flags)],
  }
}
