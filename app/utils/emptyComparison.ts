import type { PlannedAnalysis } from '#shared/plan/analysisSchema'

type Comparison = PlannedAnalysis['comparison']

/** A comparison of the kind that a newly chosen method needs, still to be filled in. */
export function emptyComparison(kind: Comparison['kind']): Comparison {
  switch (kind) {
    case 'arms': return { kind, arms: [], contrast: 'one', control: null, adjustment: 'none', visit: '' }
    case 'occasions': return { kind, first: '', second: '' }
    case 'constant': return { kind, visit: '' }
  }
}
