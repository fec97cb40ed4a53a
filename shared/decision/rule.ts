import type { Requirement } from '../plan/prerequisiteSchema'
import type { Workspace as StatisticsWorkspace } from '../statistics/workspace'
import type { Outcome } from '../statistics/types'
import type { Measure } from './report'

/** Whether the arms of the subjects are known: all of them, none for want of a list, or not all. */
export type ArmKnowledge = 'known' | 'none' | 'partial'

/**
 * What a compiled rule is run on: usable values before derivation and transformation, subjects of one arm
 * side by side. Group `g` (in the order in which the plan names the compared arms) is
 * `offsets[g] ≤ i < offsets[g + 1]`; without arms, or while arms are not known, all values stand in the first.
 */
export interface RuleSample {
  readonly offsets: Uint32Array
  readonly value: Float64Array
  readonly baseline: Float64Array | null
  readonly first: Float64Array | null
  readonly firstBaseline: Float64Array | null
  /** Subjects of the whole set, whatever their arm: with a usable value, and who should have one. */
  readonly usable: number
  readonly expected: number
  /** Subjects of the compared arms who should have a value. */
  readonly expectedCompared: number
  /** Subjects that the plan expects in this extract, over all arms. */
  readonly subjectsExpected: number
  readonly arms: ArmKnowledge
  readonly queryOpen: boolean
  readonly setUndetermined: boolean
  readonly decisionPoint: boolean
}

/** Subjects in a sample; its lists may be longer. */
export const sizeOf = ({ offsets }: RuleSample): number => offsets[offsets.length - 1] ?? 0

/** The values as one transformation leaves them, derived; view 0 is the untransformed one. */
export interface ViewState {
  readonly values: Float64Array
  ready: boolean
  /** False when a value has no transform. */
  defined: boolean
}

/** Everything that a run writes. Made once per rule and size; two runs must not share one at the same time. */
export interface Workspace {
  readonly capacity: number
  readonly views: readonly ViewState[]
  readonly statistics: StatisticsWorkspace
  /** Where a kernel leaves its figures. */
  readonly figures: Outcome
  /** The quantity that is being judged, where it is not a view itself. */
  readonly quantity: Float64Array
  /** Offsets of all values as one sample. */
  readonly pooled: Uint32Array
  /** By sample: p-values as found and adjusted across arms. */
  readonly pValues: Float64Array
  readonly adjusted: Float64Array
  /** By check: packed outcome, or `UNJUDGED`. */
  readonly outcomes: Int32Array
  /** By step: what became of it. */
  readonly stepOutcomes: Uint8Array
  readonly stepReasons: Int32Array
  /** Figures of every check, in rows of `TRACE_FIELDS`. */
  readonly trace: Float64Array
  /** Whether the walk hung on anything that is formed with arms. */
  touchedArms: boolean
}

export const TRACE_FIELDS = 9
export const VALUE = 0
export const LOWER = 1
export const UPPER = 2
export const P_VALUE = 3
export const ADJUSTED_P = 4
export const DF1 = 5
export const DF2 = 6
export const LIMIT = 7
/** 1 broken, 0 not, NaN where it cannot be told or nothing is held against it. */
export const BROKEN = 8
/**
 * Where a check keeps its figures: for each sample a head row (its size as `VALUE`, and whether it breaks) and
 * one row a measure, then those of the whole.
 */
export interface TraceLayout {
  readonly start: number
  readonly samples: number
  readonly sampleMeasures: readonly Measure[]
  readonly wholeMeasures: readonly Measure[]
}

export const traceRows = ({ samples, sampleMeasures, wholeMeasures }: Omit<TraceLayout, 'start'>): number =>
  samples * (1 + sampleMeasures.length) + wholeMeasures.length

/** Index in the trace at which the head row of a sample begins. */
export const sampleAt = ({ start, sampleMeasures }: TraceLayout, sample: number): number =>
  (start + sample * (1 + sampleMeasures.length)) * TRACE_FIELDS

/** Index in the trace at which a figure of a sample begins. */
export const figureAt = (layout: TraceLayout, sample: number, measure: number): number => sampleAt(layout, sample) + (1 + measure) * TRACE_FIELDS

/** Index in the trace at which a figure of the whole begins. */
export const wholeAt = ({ start, samples, sampleMeasures }: TraceLayout, measure: number): number =>
  (start + samples * (1 + sampleMeasures.length) + measure) * TRACE_FIELDS

/** One prerequisite made numeric: judges a sample, leaves its figures in the trace, answers a packed outcome. */
export interface Check {
  readonly requirement: Requirement
  readonly dependsOnArms: boolean
  readonly layout: TraceLayout
  readonly judge: (sample: RuleSample, workspace: Workspace) => number
}

export interface CompiledStep {
  readonly trigger: 'exactly' | 'at-least' | 'any'
  /** Bits of the switch prerequisites that the trigger names. */
  readonly mask: number
  /** Indices of its own prerequisites among the checks. */
  readonly checks: readonly number[]
}

/** What turns values into judged ones. */
export type Deriving = Pick<CompiledRule, 'derivation' | 'views'>

export interface View { readonly shift: number, readonly base: 'e' | '2' | '10' | null }

/** One planned analysis as numeric steps. The judge and a simulation run the very same. */
export interface CompiledRule {
  readonly groups: number
  readonly derivation: 'none' | 'change' | 'percent-change'
  readonly views: readonly View[]
  readonly checks: readonly Check[]
  /** Indices of the planned method's prerequisites by what their failure does. */
  readonly holds: { readonly armFree: readonly number[], readonly byArms: readonly number[] }
  readonly switches: readonly number[]
  readonly planned: readonly number[]
  readonly steps: readonly CompiledStep[]
  /** Step from which the walk goes on at the decision point; −1 for no registered method. */
  readonly leadsTo: number
  readonly dependsOnArms: boolean
  readonly switchesDependOnArms: boolean
  readonly traceLength: number
}
