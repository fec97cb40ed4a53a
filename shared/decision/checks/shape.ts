import type { Requirement } from '../../plan/prerequisiteSchema'
import { bonferroniKernel } from '../../statistics/multiplicity/bonferroni'
import { holmKernel } from '../../statistics/multiplicity/holm'
import { excessKurtosisKernel } from '../../statistics/descriptive/excessKurtosis'
import { skewnessKernel } from '../../statistics/descriptive/skewness'
import { andersonDarlingKernel } from '../../statistics/normality/andersonDarling'
import { shapiroWilkKernel } from '../../statistics/normality/shapiroWilk'
import type { SampleProblem } from '../../statistics/types'
import type { Measure } from '../report'
import {
  ADJUSTED_P, BROKEN, figureAt, LIMIT, LOWER, P_VALUE, sampleAt, type TraceLayout, UPPER, VALUE, type Workspace,
} from '../rule'
import { anyBreaks, type Breach, breaksLevel, breaksTwoSided, joinBreaches, KEEPS, readingAt, UNTOLD } from './limits'
import { type OtherReading, readOtherwise, type Untold, verdictOf } from './verdicts'

type Size = Extract<Requirement, { kind: 'symmetry' }>['limits']['size']
type Significance = NonNullable<Extract<Requirement, { kind: 'normality' }>['limits']['significance']>

/** How the shape of one or several samples is judged, by skewness, by a test of normality, or by both. */
export interface ShapeLimits {
  readonly size: Size | null
  readonly significance: Significance | null
  readonly broken: 'either' | 'both'
  readonly minimum: number
  readonly multiplicity: 'none' | 'bonferroni' | 'holm'
  readonly otherReading: OtherReading
}

const SKEWNESS = 0
const EXCESS_KURTOSIS = 1
const TEST = 2

/** Skewness and kurtosis are always reported; a test where the plan names one. */
export function shapeMeasures({ significance }: ShapeLimits): readonly Measure[] {
  return ['skewness', 'excess-kurtosis', ...significance === null ? [] : [significance.procedure]]
}

/** Writes the moments of a sample into the trace, as far as they are defined. */
function traceMoments(values: Float64Array, start: number, end: number, at: (measure: number) => number, { figures, trace }: Workspace): void {
  if (skewnessKernel(values, start, end, figures) !== null) return
  trace[at(SKEWNESS) + VALUE] = figures.statistic
  trace[at(SKEWNESS) + LOWER] = figures.lower
  trace[at(SKEWNESS) + UPPER] = figures.upper
  if (excessKurtosisKernel(values, start, end, figures) === null) {
    trace[at(EXCESS_KURTOSIS) + VALUE] = figures.statistic
    trace[at(EXCESS_KURTOSIS) + LOWER] = figures.lower
    trace[at(EXCESS_KURTOSIS) + UPPER] = figures.upper
  }
}

function traceTest({ procedure }: Significance, values: Float64Array, start: number, end: number, at: number, workspace: Workspace): SampleProblem | null {
  const { figures, statistics, trace } = workspace
  const kernel = procedure === 'shapiro-wilk' ? shapiroWilkKernel : andersonDarlingKernel
  const problem = kernel(values, start, end, statistics, figures)
  if (problem !== null) return problem
  trace[at + VALUE] = figures.statistic
  trace[at + P_VALUE] = figures.pValue
  return null
}

/** First pass: the figures of every sample that is large enough. */
function traceFigures(limits: ShapeLimits, layout: TraceLayout, values: Float64Array, offsets: Uint32Array, workspace: Workspace): void {
  for (let sample = 0; sample < layout.samples; sample++) {
    const start = offsets[sample] ?? 0
    const end = offsets[sample + 1] ?? start
    workspace.pValues[sample] = 1
    if (end - start < limits.minimum) continue
    traceMoments(values, start, end, measure => figureAt(layout, sample, measure), workspace)
    if (limits.significance === null) continue
    const at = figureAt(layout, sample, TEST)
    if (traceTest(limits.significance, values, start, end, at, workspace) === null) workspace.pValues[sample] = workspace.trace[at + P_VALUE] ?? 1
  }
}

/** A sample whose p-value is not known counts as one of the family all the same. */
function adjust({ multiplicity }: ShapeLimits, samples: number, { pValues, adjusted }: Workspace): void {
  if (multiplicity === 'bonferroni') bonferroniKernel(pValues, samples, adjusted)
  else if (multiplicity === 'holm') holmKernel(pValues, samples, adjusted)
  else adjusted.set(pValues)
}

function breachOfSize({ limit, reading }: Size, n: number, at: number, { trace }: Workspace): Breach {
  const breach = breaksTwoSided(trace[at + VALUE] ?? UNTOLD, trace[at + LOWER] ?? UNTOLD, trace[at + UPPER] ?? UNTOLD, limit, readingAt(reading, n))
  trace[at + LIMIT] = limit
  trace[at + BROKEN] = breach
  return breach
}

function breachOfTest({ level }: Significance, multiplicity: ShapeLimits['multiplicity'], sample: number, at: number, { trace, adjusted }: Workspace): Breach {
  const p = Number.isNaN(trace[at + P_VALUE] ?? UNTOLD) ? UNTOLD : adjusted[sample] ?? UNTOLD
  const breach = breaksLevel(p, level)
  if (multiplicity !== 'none') trace[at + ADJUSTED_P] = p
  trace[at + LIMIT] = level
  trace[at + BROKEN] = breach
  return breach
}

/** Second pass: what one sample shows, and why nothing can be told of it. */
function judgeSample(limits: ShapeLimits, layout: TraceLayout, sample: number, workspace: Workspace): { breach: Breach, reason: Untold | null } {
  const head = sampleAt(layout, sample)
  const n = workspace.trace[head + VALUE] ?? 0
  if (n < limits.minimum) return { breach: UNTOLD, reason: 'too-few-data' }
  const size = limits.size === null ? null : breachOfSize(limits.size, n, figureAt(layout, sample, SKEWNESS), workspace)
  const level = limits.significance === null ? null : breachOfTest(limits.significance, limits.multiplicity, sample, figureAt(layout, sample, TEST), workspace)
  const breach = joinBreaches(size, level, limits.broken)
  workspace.trace[head + BROKEN] = breach
  return { breach, reason: Number.isNaN(breach) ? 'procedure-undefined' : null }
}

/**
 * Judges the shape of samples side by side: fails when any of them breaks.
 *
 * @param values samples one after another; sample i is `offsets[i] ≤ j < offsets[i + 1]`.
 */
export function judgeShape(limits: ShapeLimits, layout: TraceLayout, values: Float64Array, offsets: Uint32Array, workspace: Workspace): number {
  traceFigures(limits, layout, values, offsets, workspace)
  adjust(limits, layout.samples, workspace)
  let whole: Breach = KEEPS
  let open: Untold | null = null
  let read: Untold | null = null
  for (let sample = 0; sample < layout.samples; sample++) {
    const { breach, reason } = judgeSample(limits, layout, sample, workspace)
    const taken = reason === null ? breach : readOtherwise(reason, limits.otherReading)
    if (Number.isNaN(taken)) open ??= reason
    else read ??= reason
    whole = anyBreaks(whole, taken)
  }
  return verdictOf(whole, Number.isNaN(whole) ? open : read)
}
