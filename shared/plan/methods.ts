import type { Comparison, PlannedAnalysis } from './analysisSchema'
import type { FallbackMethod, PlannedMethod, PrerequisiteKind, SummaryMeasure } from './terms'

export type ComparisonKind = Comparison['kind']
export type Method = PlannedMethod | FallbackMethod

/** What a method needs and what it estimates. Its words stand under `plan.methods.<method>`. */
export interface MethodEntry {
  /** How many arms it takes; null where it compares none. */
  readonly arms: 'two' | 'two-or-more' | null
  /** Kinds of prerequisites it rests on, the most telling first. */
  readonly reliesOn: readonly PrerequisiteKind[]
  readonly transforms: boolean
  /** What it estimates, by what is compared; a comparison that is not named here is not possible. */
  readonly measures: Partial<Record<ComparisonKind, SummaryMeasure>>
}

const subjects = ['count', 'missing-values'] as const

/** The catalogue: forms, verdict page, memo and documentation read it, the judge does not. */
export const METHODS: Record<Exclude<Method, 'planned-after-log'>, MethodEntry> = {
  'one-sample-t': { arms: null, reliesOn: ['normality', ...subjects], transforms: false, measures: { constant: 'mean-against-constant' } },
  'paired-t': { arms: null, reliesOn: ['normality', ...subjects], transforms: false, measures: { occasions: 'mean-of-differences' } },
  'two-sample-t': { arms: 'two', reliesOn: ['normality', 'equal-spread', ...subjects], transforms: false, measures: { arms: 'difference-of-means' } },
  'welch-t': { arms: 'two', reliesOn: ['normality', ...subjects], transforms: false, measures: { arms: 'difference-of-means' } },
  'one-way-anova': { arms: 'two-or-more', reliesOn: ['normality', 'equal-spread', ...subjects], transforms: false, measures: { arms: 'differences-among-means' } },
  'welch-anova': { arms: 'two-or-more', reliesOn: ['normality', ...subjects], transforms: false, measures: { arms: 'differences-among-means' } },
  'mann-whitney': { arms: 'two', reliesOn: ['equal-spread', ...subjects], transforms: false, measures: { arms: 'probability-of-larger' } },
  'kruskal-wallis': { arms: 'two-or-more', reliesOn: ['equal-spread', ...subjects], transforms: false, measures: { arms: 'probability-of-larger-than-all' } },
  'wilcoxon-signed-rank': {
    arms: null,
    reliesOn: ['symmetry', ...subjects],
    transforms: false,
    measures: { occasions: 'pseudomedian-of-differences', constant: 'pseudomedian-against-constant' },
  },
}

const MEASURE_AFTER_LOG: Record<PlannedMethod, SummaryMeasure> = {
  'one-sample-t': 'geometric-mean-against-constant',
  'paired-t': 'geometric-mean-of-ratios',
  'two-sample-t': 'ratio-of-geometric-means',
  'welch-t': 'ratio-of-geometric-means',
  'one-way-anova': 'ratios-among-geometric-means',
}

/** The entry of a method; the planned one after the logarithm is that method over positive values. */
export function methodEntry(method: Method, planned: PlannedMethod): MethodEntry {
  if (method !== 'planned-after-log') return METHODS[method]
  const { arms, reliesOn, measures } = METHODS[planned]
  const kind = (Object.keys(measures) as ComparisonKind[])[0]
  return {
    arms,
    reliesOn: ['positive-values', ...reliesOn],
    transforms: true,
    measures: kind === undefined ? {} : { [kind]: MEASURE_AFTER_LOG[planned] },
  }
}

/** The one measure that a method may name here; null where it cannot compare this way. */
export function measureOf(method: Method, planned: PlannedMethod, comparison: ComparisonKind): SummaryMeasure | null {
  return methodEntry(method, planned).measures[comparison] ?? null
}

/** Whether a method can be used on a comparison: its kind and, between arms, how many there are. */
export function fits(method: Method, planned: PlannedMethod, comparison: Comparison): boolean {
  const entry = methodEntry(method, planned)
  if (entry.measures[comparison.kind] === undefined) return false
  return comparison.kind !== 'arms' || entry.arms !== 'two' || comparison.arms.length === 2
}

/** The steps that could follow the planned method of an analysis. */
export function fallbacksFor({ method, comparison }: Pick<PlannedAnalysis, 'method' | 'comparison'>, all: readonly FallbackMethod[]): FallbackMethod[] {
  return all.filter(fallback => fallback !== method && fits(fallback, method, comparison))
}
