import type { AnalysisVerdict, FallbackMethod, PlannedMethod, PrerequisiteKind, PrerequisiteVerdict, Quantity, Reason, ScreenKind, SeenVerdict, StandingScreen, SummaryMeasure } from '../plan/terms'

/**
 * The one report: everything that the judge found, in full precision. Plain data, RFC 8785 ready: no NaN, no
 * undefined. Nobody sees it but through `release` (shared/blinding).
 */
export interface Report {
  readonly format: 'stipule-report/1'
  readonly engine: string
  readonly plan: { readonly hash: string, readonly protocol: { readonly number: string, readonly version: string } }
  readonly extract: ExtractIdentity
  /** `not-needed` in open-label studies whose extract carries the arm. */
  readonly allocation: { readonly state: 'none' | 'not-needed' | 'true' | 'dummy', readonly hash: string | null }
  readonly screens: readonly ScreenReport[]
  readonly analyses: readonly AnalysisReport[]
}

export interface ExtractIdentity {
  /** SHA-256 of the bytes as received, hex. */
  readonly bytesHash: string
  /** SHA-256 of the mapped arm-free content, sorted by key, hex: row order alone makes no new extract. */
  readonly contentHash: string
  /** Null only outside the ledger. */
  readonly cutOff: string | null
  readonly purpose: 'interim' | 'database-lock'
  /** Which look it is; null when unscheduled, at the decision point, or outside the ledger. */
  readonly look: string | null
  readonly standing: 'look' | 're-cut' | 'unscheduled' | 'decision-point' | 'outside-ledger'
  readonly rows: number
}

export interface ScreenReport {
  readonly screen: string
  readonly kind: ScreenKind | StandingScreen
  readonly action: 'hold' | 'warn'
  readonly endpoint: string
  /** Rows it touches (source row numbers, at most 200 kept) and how many there are in all. */
  readonly rows: readonly number[]
  readonly count: number
  readonly query: 'open' | 'cleared' | 'overruled' | null
}

/** Rows kept and dropped on the way to the values, arm-free. */
export interface SelectionReport {
  readonly rows: number
  readonly kept: number
  readonly dropped: readonly { readonly reason: 'other-parameter' | 'other-visit' | 'not-in-set' | 'not-flagged' | 'no-value' | 'no-baseline' | 'zero-baseline' | 'other-occasion-missing', readonly count: number }[]
  readonly imputed: number
  /** Subjects who should have a value, and those who have a usable one, over all arms. */
  readonly expected: number
  readonly usable: number
}

export interface AnalysisReport {
  readonly analysis: string
  readonly method: PlannedMethod
  readonly summaryMeasure: SummaryMeasure
  /** Whether any part of the verdict is formed with arms. */
  readonly dependsOnArms: boolean
  readonly selection: SelectionReport
  readonly verdict: VerdictReport
  /** What an arm-free cause alone decides; null when none does. */
  readonly armFreeVerdict: VerdictReport | null
  readonly prerequisites: readonly PrerequisiteReport[]
  readonly steps: readonly StepReport[]
  /** Values about the overall median over every subject of the set, arms unknown; decides nothing. */
  readonly proxy: ProxyReport | null
  /** Figures by arm, for cleared members; null in an analysis without arms. */
  readonly byArm: readonly ArmReport[] | null
  /** Plot of the judged quantity: arm-free analyses and open-label studies for all, else for the cleared. */
  readonly plot: PlotData | null
}

export interface VerdictReport {
  readonly word: AnalysisVerdict
  /** The step that applies, or because of which the walk stopped. */
  readonly step: string | null
  readonly reason: Reason | null
  /** At the decision point: the reason that could not stand there. */
  readonly setAside: Reason | null
  readonly changesQuestion: boolean
}

export interface PrerequisiteReport {
  readonly prerequisite: string
  readonly kind: PrerequisiteKind
  readonly quantity: Quantity | null
  readonly consequence: 'switch' | 'hold' | 'reported-only' | 'required'
  readonly dependsOnArms: boolean
  readonly verdict: PrerequisiteVerdict
  /** Why it is not assessable; beside `met` or `not-met`: the reason for which the plan registers that other reading. */
  readonly reason: Reason | null
  /** One member per judged sample: per arm, or one for a pooled or arm-free quantity. */
  readonly samples: readonly SampleReport[]
  /** Figures of the whole: ratio of SDs, Brown–Forsythe, share of missing values. */
  readonly figures: readonly Figure[]
}

export interface SampleReport {
  /** The arm, or null for a sample that belongs to none. */
  readonly arm: string | null
  readonly n: number
  readonly figures: readonly Figure[]
  readonly broken: boolean | null
}

export const MEASURES = ['skewness', 'excess-kurtosis', 'shapiro-wilk', 'anderson-darling', 'sd-ratio', 'brown-forsythe', 'share-missing', 'count', 'not-positive'] as const
export type Measure = typeof MEASURES[number]

/** One figure with what it was held against. Fields that a measure does not have are null. */
export interface Figure {
  readonly measure: Measure
  readonly value: number | null
  readonly lower: number | null
  readonly upper: number | null
  readonly pValue: number | null
  /** After the adjustment across arms. */
  readonly adjustedP: number | null
  readonly df1: number | null
  readonly df2: number | null
  /** The registered limit or level; null when the figure is reported without one. */
  readonly limit: number | null
  readonly broken: boolean | null
}

export interface StepReport {
  readonly step: string
  readonly method: FallbackMethod
  readonly summaryMeasure: SummaryMeasure
  readonly changesQuestion: boolean
  readonly triggered: boolean
  /** `not-reached`: an earlier step decided, or none was needed. */
  readonly outcome: 'applies' | 'not-triggered' | 'prerequisite-not-met' | 'not-assessable' | 'not-reached'
  readonly reason: Reason | null
  readonly prerequisites: readonly PrerequisiteReport[]
}

export interface ProxyReport {
  readonly n: number
  readonly figures: readonly Figure[]
  readonly plot: PlotData
}

export interface ArmReport {
  readonly arm: string
  readonly n: number
  readonly sd: number | null
  readonly skewness: number | null
  readonly excessKurtosis: number | null
}

/** What a plot shows. No plot shows a location: every quantity is centred, within subject and between arms. */
export const PLOTTED = ['residuals', 'residuals-by-own-sd', 'values-about-arm-medians', 'differences-about-median', 'values-about-median'] as const
export type Plotted = typeof PLOTTED[number]

/**
 * Already reduced: histogram bins and at most 400 quantile points with a pointwise 95 % band, to six
 * significant digits.
 */
export interface PlotData {
  readonly quantity: Plotted
  /** Unit of the quantity; `1` where it has none. */
  readonly unit: string
  readonly edges: readonly number[]
  readonly counts: readonly number[]
  readonly fitted: { readonly mean: number, readonly sd: number } | null
  readonly quantiles: readonly { readonly theoretical: number, readonly value: number, readonly lower: number, readonly upper: number }[]
}

/** A report as one viewer may see it; what is withheld is null or held. */
export interface SeenReport extends Omit<Report, 'analyses' | 'allocation'> {
  readonly allocation: { readonly state: Report['allocation']['state'], readonly hash: string | null }
  readonly view: 'whole' | 'blinded'
  readonly analyses: readonly SeenAnalysis[]
}

export interface SeenAnalysis extends Omit<AnalysisReport, 'verdict' | 'armFreeVerdict' | 'prerequisites' | 'steps' | 'byArm'> {
  readonly verdict: Omit<VerdictReport, 'word'> & { readonly word: SeenVerdict }
  /** Whether the verdict may be told to every member. */
  readonly released: boolean
  readonly prerequisites: readonly SeenPrerequisite[]
  readonly steps: readonly SeenStep[]
  readonly byArm: readonly ArmReport[] | null
}

export type SeenPrerequisite = Omit<PrerequisiteReport, 'verdict'> & { readonly verdict: PrerequisiteVerdict | 'held' }
export type SeenStep = Omit<StepReport, 'triggered' | 'outcome' | 'prerequisites'> & {
  readonly triggered: boolean | null
  readonly outcome: StepReport['outcome'] | 'held'
  readonly prerequisites: readonly SeenPrerequisite[]
}
