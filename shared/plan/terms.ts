/** The closed lists of the plan; their words stand in shared/wording under `plan` and `verdict`. */

export const PLANNED_METHODS = ['one-sample-t', 'paired-t', 'two-sample-t', 'welch-t', 'one-way-anova'] as const
export type PlannedMethod = typeof PLANNED_METHODS[number]

export const FALLBACK_METHODS = ['welch-t', 'welch-anova', 'planned-after-log', 'mann-whitney', 'wilcoxon-signed-rank', 'kruskal-wallis'] as const
export type FallbackMethod = typeof FALLBACK_METHODS[number]

/** What a method estimates. Location shift is refused until similar shapes can be judged. */
export const SUMMARY_MEASURES = [
  'mean-against-constant', 'mean-of-differences', 'difference-of-means', 'differences-among-means',
  'ratio-of-geometric-means', 'ratios-among-geometric-means', 'geometric-mean-of-ratios', 'geometric-mean-against-constant',
  'probability-of-larger', 'probability-of-larger-than-all', 'pseudomedian-of-differences', 'pseudomedian-against-constant',
] as const
export type SummaryMeasure = typeof SUMMARY_MEASURES[number]

export const PREREQUISITE_KINDS = ['normality', 'equal-spread', 'symmetry', 'positive-values', 'count', 'missing-values'] as const
export type PrerequisiteKind = typeof PREREQUISITE_KINDS[number]

/**
 * On what a prerequisite is judged. `values` is the one sample of an analysis without arms, `differences` the
 * within-subject differences; the others are formed with arms.
 */
export const QUANTITIES = ['values-within-arms', 'residuals', 'residuals-by-own-sd', 'differences', 'values'] as const
export type Quantity = typeof QUANTITIES[number]

/** How a size with confidence limits is read; `by-n` is the lower limit below n = 50 and the estimate from there. */
export const READINGS = ['estimate', 'lower-limit', 'upper-limit', 'by-n'] as const
export type Reading = typeof READINGS[number]

/** What the failure of a prerequisite does. */
export const CONSEQUENCES = ['switch', 'hold', 'reported-only'] as const
export type Consequence = typeof CONSEQUENCES[number]

export const SCREEN_KINDS = ['impossible-value', 'duplicate-key', 'implausible-value'] as const
export type ScreenKind = typeof SCREEN_KINDS[number]

/** Screens that no plan registers because none may do without them; they always hold, under their kind as id. */
export const STANDING_SCREENS = ['wrong-unit', 'unknown-visit'] as const
export type StandingScreen = typeof STANDING_SCREENS[number]

/** Why something is not assessable (closed list). */
export const REASONS = [
  'too-few-data', 'procedure-undefined', 'check-too-weak', 'allocation-withheld', 'data-query-open',
  'analysis-set-undetermined', 'too-few-subjects', 'too-many-missing',
] as const
export type Reason = typeof REASONS[number]

export const PREREQUISITE_VERDICTS = ['met', 'not-met', 'not-assessable'] as const
export type PrerequisiteVerdict = typeof PREREQUISITE_VERDICTS[number]

export const ANALYSIS_VERDICTS = ['planned-method-stands', 'fallback-applies', 'no-registered-method', 'not-assessable'] as const
export type AnalysisVerdict = typeof ANALYSIS_VERDICTS[number]

/** As seen by someone not cleared there is one more. */
export type SeenVerdict = AnalysisVerdict | 'held-behind-the-blind'
