import fc from 'fast-check'
import type { Comparison, Fallback, PlannedAnalysis, Transformation, Trigger } from '#shared/plan/analysisSchema'
import { type ComparisonKind, fallbacksFor, measureOf } from '#shared/plan/methods'
import type { Prerequisite, Requirement } from '#shared/plan/prerequisiteSchema'
import { PREREQUISITES } from '#shared/plan/prerequisites'
import type { Plan } from '#shared/plan/schema'
import { FALLBACK_METHODS, type PlannedMethod, PREREQUISITE_KINDS, type PrerequisiteKind, type Reading, READINGS } from '#shared/plan/terms'

/** One row of an extract before it becomes columns. */
export interface Row {
  readonly subject: string
  readonly visit: string
  readonly value: number
  readonly baseline: number
  readonly inSet: boolean
  readonly flagged: boolean
}

export interface Trial {
  readonly plan: Plan
  readonly rows: readonly Row[]
  /** Null: no list was given. In open-label trials the extract carries it. */
  readonly allocation: Readonly<Record<string, string>> | null
  readonly purpose: 'interim' | 'database-lock'
}

const VISITS = ['V1', 'V2', 'V3']

/** Draws one thing after another; fast-check shrinks each of them. */
class Draw {
  constructor(readonly g: fc.GeneratorValue) {}
  one<T>(...list: readonly T[]): T {
    return list[this.int(0, list.length - 1)]!
  }

  int(min: number, max: number): number {
    return this.g(fc.integer, { min, max })
  }

  /** True so many times out of a hundred. */
  chance(percent: number): boolean {
    return this.int(1, 100) <= percent
  }
}

function comparisonOf(draw: Draw, kind: ComparisonKind, arms: readonly string[]): Comparison {
  if (kind === 'constant') return { kind, visit: draw.one(...VISITS) }
  if (kind === 'occasions') return { kind, first: 'V1', second: draw.one('V2', 'V3') }
  const compared = arms.slice(0, draw.int(2, arms.length))
  const two = compared.length === 2
  return { kind, arms: draw.chance(50) ? compared : compared.toReversed(), contrast: two ? 'one' : 'global', control: null, adjustment: 'none', visit: draw.one(...VISITS) }
}

function methodOf(draw: Draw, comparison: Comparison): PlannedMethod {
  if (comparison.kind === 'constant') return 'one-sample-t'
  if (comparison.kind === 'occasions') return 'paired-t'
  return comparison.arms.length === 2 ? draw.one('two-sample-t', 'welch-t', 'one-way-anova') : 'one-way-anova'
}

const otherReading = (draw: Draw) => ({
  tooFewData: draw.one(null, null, null, 'met', 'not-met'),
  procedureUndefined: draw.one(null, null, null, 'met', 'not-met'),
} as const)

function limitsOf<M extends string, P extends string>(draw: Draw, measure: M, limit: number, readings: readonly Reading[], procedures: readonly P[]) {
  const which = draw.one('size', 'level', 'two')
  return {
    size: which === 'level' ? null : { measure, limit, reading: draw.one(...readings) },
    significance: which === 'size' ? null : { procedure: draw.one(...procedures), level: draw.one(0.2, 0.05, 0.45) },
    broken: draw.one('either', 'both'),
  } as const
}

function requirementOf(draw: Draw, kind: PrerequisiteKind, id: string, comparison: Comparison): Requirement {
  const arms = comparison.kind === 'arms'
  switch (kind) {
    case 'normality': {
      const quantity = draw.one(...PREREQUISITES.normality.quantities[comparison.kind] ?? [])
      const limits = limitsOf(draw, 'skewness', draw.one(0.3, 0.1, 0.8), READINGS, ['shapiro-wilk', 'anderson-darling'])
      const adjustable = quantity === 'values-within-arms' && limits.significance !== null
      return { id, kind, quantity, limits, minimum: draw.one(8, 9, ...id.startsWith('r') ? [30, 45] : [20]), multiplicity: adjustable ? draw.one('none', 'bonferroni', 'holm') : 'none', otherReading: otherReading(draw) }
    }
    case 'equal-spread': {
      const readings: readonly Reading[] = arms && comparison.arms.length > 2 ? ['estimate'] : READINGS
      return { id, kind, quantity: 'values-within-arms', limits: limitsOf(draw, 'sd-ratio', draw.one(1.2, 1.05, 2), readings, ['brown-forsythe']), minimum: draw.one(3, 5, ...id.startsWith('r') ? [14, 25] : [12]), otherReading: otherReading(draw) }
    }
    case 'symmetry': return {
      id, kind, quantity: comparison.kind === 'occasions' ? 'differences' : 'values',
      limits: { size: { measure: 'skewness', limit: draw.one(0.3, 0.1, 0.8), reading: draw.one(...READINGS) } }, minimum: draw.one(3, 8), otherReading: otherReading(draw),
    }
    case 'positive-values': return { id, kind }
    case 'count': return {
      id, kind, scope: arms ? draw.one('per-arm', 'in-all') : 'in-all',
      least: draw.chance(60) ? { kind: 'number', n: draw.one(2, 5, 3, 12) } : { kind: 'share-of-expected', share: draw.one(0.1, 0.3, 0.2, 1) },
    }
    case 'missing-values': return { id, kind, scope: arms ? draw.one('compared-arms', 'all-arms') : 'all-arms', most: draw.one(0.25, 0.1, 0.6, 0) }
  }
}

function requirementsOf(draw: Draw, prefix: string, most: number, comparison: Comparison): Requirement[] {
  const possible = PREREQUISITE_KINDS.filter(kind => PREREQUISITES[kind].comparisons.includes(comparison.kind))
  // Shape and spread decide most walks, so they are drawn more often.
  const kinds = [...possible, ...possible.filter(kind => PREREQUISITES[kind].consequences.includes('switch'))]
  return Array.from({ length: draw.one(2, most, 3, 1, 2, 0) }, (_, index) => requirementOf(draw, draw.one(...kinds), `${prefix}${index}`, comparison))
}

function triggerOf(draw: Draw, switches: readonly string[]): Trigger | null {
  if (switches.length === 0) return null
  const kind = draw.one('any', 'at-least', 'exactly')
  if (kind === 'any') return { kind }
  const of = switches.filter(() => draw.chance(60))
  return { kind, of: of.length > 0 ? of : [switches[0]!] }
}

function fallbackOf(draw: Draw, id: string, analysis: PlannedAnalysis, derivation: string): Fallback | null {
  const switches = analysis.prerequisites.filter(({ onFailure }) => onFailure === 'switch').map(each => each.id)
  const trigger = triggerOf(draw, switches)
  const methods = fallbacksFor(analysis, FALLBACK_METHODS).filter(method => method !== 'planned-after-log' || derivation !== 'percent-change')
  if (trigger === null || methods.length === 0) return null
  const method = draw.one(...methods)
  const logged = method === 'planned-after-log'
  const transformation: Transformation | null = logged ? { kind: 'log', base: draw.one('e', '2', '10'), shift: draw.one(0, 0, 1), acts: 'before-derivation', source: 'Earlier trial' } : null
  const own = requirementsOf(draw, 'r', 2, analysis.comparison)
  return {
    id, method, transformation, trigger,
    summaryMeasure: measureOf(method, analysis.method, analysis.comparison.kind)!,
    prerequisites: logged ? [{ id: 'positive', kind: 'positive-values' }, ...own] : own,
  }
}

function analysisOf(draw: Draw, id: string, arms: readonly string[], derivation: string): PlannedAnalysis {
  const comparison = comparisonOf(draw, draw.one('arms', 'arms', 'arms', 'occasions', 'constant'), arms)
  const method = methodOf(draw, comparison)
  const prerequisites = requirementsOf(draw, 'p', 4, comparison).map((requirement): Prerequisite => {
    const [usual = 'hold', rare = 'reported-only'] = PREREQUISITES[requirement.kind].consequences
    return { ...requirement, onFailure: draw.chance(92) ? usual : rare }
  })
  const analysis: PlannedAnalysis = {
    id, label: id, importance: 'other', estimand: null, endpoint: 'Y', analysisSet: 'FAS',
    recordSelection: draw.chance(30) ? { column: 'ANL01FL', value: 'Y' } : null,
    comparison, method, summaryMeasure: measureOf(method, method, comparison.kind)!,
    nullValue: 1, direction: 'two-sided', alpha: 0.05, prerequisites, fallbacks: [], notAssessableLeadsTo: null,
  }
  const fallbacks = Array.from({ length: draw.one(2, 3, 1, 4, 0) }, (_, index) => fallbackOf(draw, `S${index}`, analysis, derivation)).filter(step => step !== null)
  return { ...analysis, fallbacks, notAssessableLeadsTo: draw.one(...fallbacks.map(step => step.id), ...fallbacks.map(step => step.id), null) }
}

function planOf(draw: Draw): Plan {
  const arms = ['A', 'B', 'C', 'D'].slice(0, draw.int(2, 4))
  const derivation = draw.one('none', 'none', 'change', 'percent-change')
  const expected = draw.int(4, 40)
  return {
    format: 'stipule-plan/1',
    protocol: { number: 'RANDOM-1', version: '1', title: 'Random' },
    blinding: draw.one('blinded', 'blinded', 'open-label'),
    arms: arms.map(id => ({ id, label: `Arm ${id}`, ratio: draw.int(1, 3) })),
    visits: VISITS.map(id => ({ id, label: id })),
    analysisSets: [{ id: 'FAS', label: 'Full', column: 'FASFL', value: 'Y' }],
    endpoints: [{ id: 'Y', label: 'Y', unit: 'u', possible: { min: draw.one(null, -60), max: null }, plausible: { min: null, max: 90 }, derivation }],
    looks: [{ id: 'L1', name: 'Look 1', cutOff: '2026-01-10', daysBefore: 3, daysAfter: 3, expectedSubjects: expected }],
    decisionPoint: { name: 'Lock', expectedSubjects: expected + draw.int(0, 20) },
    release: { armDependent: 'each-look', namesFailed: draw.chance(50) },
    acknowledger: { email: null, days: 7 },
    screens: draw.chance(50) ? [] : [{ id: 'IMP', kind: 'impossible-value', action: draw.one('hold', 'warn') }],
    analyses: Array.from({ length: draw.int(1, 2) }, (_, index) => analysisOf(draw, `AN${index}`, arms, derivation)),
  }
}

/** Values of a few kinds: continuous, skewed, coarse, all alike. */
function valueOf(draw: Draw, shape: string, scale: number): number {
  const u = draw.int(1, 999) / 1000
  const bell = (draw.int(0, 1000) + draw.int(0, 1000) + draw.int(0, 1000) - 1500) / 250
  switch (shape) {
    case 'bell': return 20 + scale * bell
    case 'skewed': return scale * u ** 4 * 8 + 0.25
    case 'coarse': return Math.floor(u * 6)
    case 'signed': return Math.floor(u * 21) - 10
    default: return 7
  }
}

function rowsOf(draw: Draw, subjects: readonly string[], arms: Readonly<Record<string, string>>): Row[] {
  const shape = draw.one('skewed', 'bell', 'skewed', 'bell', 'coarse', 'signed', 'skewed', 'constant')
  const wide = draw.one('A', 'B')
  const gaps = draw.one(0, 0, 0, 4, 25)
  const clean = draw.chance(90)
  return subjects.flatMap((subject) => {
    const inSet = draw.chance(92)
    return VISITS.flatMap((visit): Row[] => {
      if (draw.chance(gaps)) return []
      const scale = arms[subject] === wide ? 4 : 1
      const row: Row = {
        subject, visit, inSet,
        value: draw.chance(gaps) ? Number.NaN : clean || draw.chance(97) ? valueOf(draw, shape, scale) : -99,
        baseline: draw.chance(gaps) ? Number.NaN : valueOf(draw, shape, 1),
        flagged: draw.chance(94),
      }
      return clean || draw.chance(98) ? [row] : [row, { ...row, value: row.value + 1 }]
    })
  })
}

/** Allocations of the same subjects; the second is drawn independently of the first. */
function allocate(draw: Draw, subjects: readonly string[], arms: readonly string[]): Record<string, string> {
  return Object.fromEntries(subjects.map(subject => [subject, draw.one(...arms)]))
}

/** Subjects whom neither of two allocations names, so that both say equally much. */
function leaveOut(draw: Draw, allocation: Record<string, string>, subjects: readonly string[]): void {
  if (subjects.length > 0 && draw.chance(8)) Reflect.deleteProperty(allocation, draw.one(...subjects))
}

export interface TrialPair { readonly trial: Trial, readonly otherAllocation: Trial['allocation'] }

/** Consistent plans with extracts that reach every branch of the decision rule, and a second allocation. */
export const trialPairs: fc.Arbitrary<TrialPair> = fc.gen().map((g) => {
  const draw = new Draw(g)
  const plan = planOf(draw)
  const arms = plan.arms.map(({ id }) => id)
  const subjects = Array.from({ length: draw.one(30, 60, 45, 24, 12, 36, 54, 40, 48, 20, 28, 56, 3, 0) }, (_, index) => `S${String(index).padStart(2, '0')}`)
  const allocation = allocate(draw, subjects, arms)
  const other = allocate(draw, subjects, arms)
  const rows = rowsOf(draw, subjects, allocation)
  const purpose = draw.one('interim', 'database-lock')
  const given = plan.blinding === 'open-label' || draw.chance(90)
  leaveOut(draw, allocation, subjects)
  leaveOut(draw, other, subjects)
  return { trial: { plan, rows, purpose, allocation: given ? allocation : null }, otherAllocation: given ? other : null }
})

export const trials: fc.Arbitrary<Trial> = trialPairs.map(({ trial }) => trial)
