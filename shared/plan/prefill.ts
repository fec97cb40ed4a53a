import { type ComparisonKind, METHODS } from './methods'
import type { Prerequisite, Requirement } from './prerequisiteSchema'
import { PREREQUISITES } from './prerequisites'
import type { Consequence, PlannedMethod, PrerequisiteKind, Quantity } from './terms'

/** `pretest`: failures switch or hold. `reported-only`: the robust default, judged and told but deciding nothing. */
export type PrefillStyle = 'pretest' | 'reported-only'

const strict = { tooFewData: null, procedureUndefined: null }

/**
 * A size beside a level, both of which must break: a level alone fails trivial departures at large n, a size
 * alone fails chance at small n.
 */
const skewness = { measure: 'skewness', limit: 1, reading: 'by-n' } as const

/** Below this neither skewness nor spread can be told from chance in any sample of practical use. */
const LEAST_JUDGED = 8

function normality(quantity: Quantity): Requirement {
  return {
    id: 'normality', kind: 'normality', quantity,
    limits: { size: skewness, significance: { procedure: 'shapiro-wilk', level: 0.05 }, broken: 'both' },
    minimum: LEAST_JUDGED, multiplicity: 'none', otherReading: strict,
  }
}

/** One kind of prerequisite as it is usually registered, for the editor's *add*. */
export function suggestRequirement(kind: PrerequisiteKind, comparison: ComparisonKind): Requirement {
  switch (kind) {
    case 'normality': {
      // With equal spread gated separately, or not assumed at all, each arm is measured by its own SD.
      const [usual = 'values'] = PREREQUISITES.normality.quantities[comparison] ?? []
      return normality(usual)
    }
    case 'equal-spread': return {
      id: 'equal-spread', kind, quantity: 'values-within-arms',
      limits: { size: null, significance: { procedure: 'brown-forsythe', level: 0.05 }, broken: 'either' },
      minimum: LEAST_JUDGED, otherReading: strict,
    }
    case 'symmetry': return {
      id: 'symmetry', kind, quantity: comparison === 'occasions' ? 'differences' : 'values',
      limits: { size: { ...skewness, limit: 0.5 } }, minimum: LEAST_JUDGED, otherReading: strict,
    }
    case 'positive-values': return { id: 'positive-values', kind }
    case 'count': return { id: 'count', kind, scope: comparison === 'arms' ? 'per-arm' : 'in-all', least: { kind: 'number', n: LEAST_JUDGED } }
    case 'missing-values': return { id: 'missing-values', kind, scope: 'all-arms', most: 0.2 }
  }
}

function withConsequence(requirement: Requirement, onFailure: Consequence): Prerequisite {
  return { ...requirement, onFailure }
}

/** What a planned method relies on, as a first suggestion for the editor; the author answers for every limit. */
export function prefill(method: PlannedMethod, style: PrefillStyle): Prerequisite[] {
  const { reliesOn, measures } = METHODS[method]
  const comparison = (Object.keys(measures) as ComparisonKind[])[0] ?? 'arms'
  return reliesOn.map((kind) => {
    const [usual = 'reported-only'] = PREREQUISITES[kind].consequences
    return withConsequence(suggestRequirement(kind, comparison), style === 'pretest' ? usual : 'reported-only')
  })
}
