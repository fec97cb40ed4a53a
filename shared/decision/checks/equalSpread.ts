import type { Requirement } from '../../plan/prerequisiteSchema'
import { brownForsytheKernel } from '../../statistics/spread/brownForsythe'
import { sdRatioKernel } from '../../statistics/spread/sdRatio'
import { viewValues } from '../derive'
import type { Measure } from '../report'
import {
  BROKEN, type Deriving, DF1, DF2, LIMIT, LOWER, P_VALUE, type RuleSample, sampleAt, type TraceLayout, UPPER, VALUE, wholeAt, type Workspace,
} from '../rule'
import { type Breach, breaksLevel, breaksUpwards, joinBreaches, readingAt, UNTOLD } from './limits'
import { wholeVerdict } from './verdicts'

type EqualSpread = Extract<Requirement, { kind: 'equal-spread' }>

/** The ratio of SDs is always reported, the test where the plan names it. */
export const spreadMeasures = ({ limits }: EqualSpread): readonly Measure[] => ['sd-ratio', ...limits.significance === null ? [] : [limits.significance.procedure]]

const RATIO = 0
const TEST = 1

function breachOfRatio({ limits: { size } }: EqualSpread, values: Float64Array, offsets: Uint32Array, at: number, { figures, statistics, trace }: Workspace): Breach | null {
  if (sdRatioKernel(values, offsets, statistics, figures) !== null) return size === null ? null : UNTOLD
  trace[at + VALUE] = figures.statistic
  trace[at + LOWER] = figures.lower
  trace[at + UPPER] = figures.upper
  if (size === null) return null
  const n = offsets[offsets.length - 1] ?? 0
  const breach = breaksUpwards(figures.statistic, figures.lower, figures.upper, size.limit, readingAt(size.reading, n))
  trace[at + LIMIT] = size.limit
  trace[at + BROKEN] = breach
  return breach
}

function breachOfTest({ limits: { significance } }: EqualSpread, values: Float64Array, offsets: Uint32Array, at: number, { figures, statistics, trace }: Workspace): Breach | null {
  if (significance === null) return null
  if (brownForsytheKernel(values, offsets, statistics, figures) !== null) return UNTOLD
  const breach = breaksLevel(figures.pValue, significance.level)
  trace[at + VALUE] = figures.statistic
  trace[at + P_VALUE] = figures.pValue
  trace[at + DF1] = figures.df1
  trace[at + DF2] = figures.df2
  trace[at + LIMIT] = significance.level
  trace[at + BROKEN] = breach
  return breach
}

/** Similar spread of the arms: the ratio of the largest to the smallest SD, Brown–Forsythe, or both. */
export function spreadCheck(requirement: EqualSpread, view: number, deriving: Deriving, layout: TraceLayout) {
  const { minimum, otherReading, limits } = requirement
  return (sample: RuleSample, workspace: Workspace): number => {
    const { offsets } = sample
    let tooFew = false
    for (let group = 0; group < layout.samples; group++) {
      const n = (offsets[group + 1] ?? 0) - (offsets[group] ?? 0)
      workspace.trace[sampleAt(layout, group) + VALUE] = n
      tooFew ||= n < minimum
    }
    if (tooFew) return wholeVerdict(UNTOLD, 'too-few-data', otherReading)
    const values = viewValues(view, deriving, sample, workspace)
    if (values === null) return wholeVerdict(UNTOLD, 'procedure-undefined', otherReading)
    const size = breachOfRatio(requirement, values, offsets, wholeAt(layout, RATIO), workspace)
    const level = breachOfTest(requirement, values, offsets, wholeAt(layout, TEST), workspace)
    return wholeVerdict(joinBreaches(size, level, limits.broken), 'procedure-undefined', otherReading)
  }
}
