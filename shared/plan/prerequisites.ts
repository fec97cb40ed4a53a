import type { ComparisonKind } from './methods'
import type { Consequence, PrerequisiteKind, Quantity } from './terms'

/**
 * What the plan may say about a kind of prerequisite. Its words stand under `plan.kinds.<kind>`, its two
 * sentences under `plan.sentences.<kind>`, its procedures with their sources in docs/statistics.md.
 */
export interface PrerequisiteEntry {
  readonly consequences: readonly Consequence[]
  /** On what it may be judged, by what is compared; empty where it has no quantity. */
  readonly quantities: Partial<Record<ComparisonKind, readonly Quantity[]>>
  readonly comparisons: readonly ComparisonKind[]
  /** The least number of values with which each of its procedures is defined. */
  readonly least: Readonly<Record<string, number>>
}

const everywhere = ['arms', 'occasions', 'constant'] as const
const shape = ['switch', 'reported-only'] as const
const subjects = ['hold', 'reported-only'] as const

export const PREREQUISITES: Record<PrerequisiteKind, PrerequisiteEntry> = {
  'normality': {
    consequences: shape,
    quantities: { arms: ['residuals-by-own-sd', 'residuals', 'values-within-arms'], occasions: ['differences'], constant: ['values'] },
    comparisons: everywhere,
    least: { 'skewness': 3, 'shapiro-wilk': 3, 'anderson-darling': 8 },
  },
  'equal-spread': { consequences: shape, quantities: { arms: ['values-within-arms'] }, comparisons: ['arms'], least: { 'sd-ratio': 2, 'brown-forsythe': 2 } },
  'symmetry': {
    consequences: shape,
    quantities: { occasions: ['differences'], constant: ['values'] },
    comparisons: ['occasions', 'constant'],
    least: { skewness: 3 },
  },
  'positive-values': { consequences: shape, quantities: {}, comparisons: everywhere, least: {} },
  'count': { consequences: subjects, quantities: {}, comparisons: everywhere, least: {} },
  'missing-values': { consequences: subjects, quantities: {}, comparisons: everywhere, least: {} },
}
