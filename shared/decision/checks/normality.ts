import type { Requirement } from '../../plan/prerequisiteSchema'
import { residualsByOwnSdKernel, residualsKernel } from '../../statistics/descriptive/residuals'
import type { SampleProblem } from '../../statistics/types'
import { viewValues } from '../derive'
import { type Deriving, type RuleSample, sampleAt, sizeOf, type TraceLayout, VALUE, type Workspace } from '../rule'
import { UNTOLD } from './limits'
import { judgeShape, type ShapeLimits } from './shape'
import { untoldFor, wholeVerdict } from './verdicts'

type Normality = Extract<Requirement, { kind: 'normality' }>
type Symmetry = Extract<Requirement, { kind: 'symmetry' }>
type Pooled = 'residuals' | 'residuals-by-own-sd'

export const normalityLimits = ({ limits, minimum, multiplicity, otherReading }: Normality): ShapeLimits => ({ ...limits, minimum, multiplicity, otherReading })

/** Symmetry is read off the skewness alone. */
export const symmetryLimits = ({ limits, minimum, otherReading }: Symmetry): ShapeLimits =>
  ({ size: limits.size, significance: null, broken: 'either', minimum, multiplicity: 'none', otherReading })

const isPooled = (quantity: Normality['quantity'] | Symmetry['quantity']): quantity is Pooled => quantity === 'residuals' || quantity === 'residuals-by-own-sd'

/** How many samples are judged: one an arm for values within arms, else one. */
export const samplesJudged = (requirement: Normality | Symmetry, groups: number): number => (requirement.quantity === 'values-within-arms' ? groups : 1)

/** Pooled residuals need every arm: with one empty there is no model. */
function formResiduals(quantity: Pooled, values: Float64Array, { offsets }: RuleSample, into: Float64Array): SampleProblem | null {
  for (let group = 0; group + 1 < offsets.length; group++) {
    if (offsets[group] === offsets[group + 1]) return 'sample-too-small'
  }
  if (quantity === 'residuals-by-own-sd') return residualsByOwnSdKernel(values, offsets, into)
  residualsKernel(values, offsets, into)
  return null
}

/** Sizes first: they stand in the report also where nothing else can be told. */
function traceSizes(layout: TraceLayout, offsets: Uint32Array, { trace }: Workspace): void {
  for (let sample = 0; sample < layout.samples; sample++) trace[sampleAt(layout, sample) + VALUE] = (offsets[sample + 1] ?? 0) - (offsets[sample] ?? 0)
}

/** Judges the shape of whatever the prerequisite names, on the values of one view. */
export function shapeCheck(requirement: Normality | Symmetry, limits: ShapeLimits, view: number, deriving: Deriving, layout: TraceLayout) {
  const { quantity } = requirement
  return (sample: RuleSample, workspace: Workspace): number => {
    workspace.pooled[1] = sizeOf(sample)
    const offsets = quantity === 'values-within-arms' ? sample.offsets : workspace.pooled
    traceSizes(layout, offsets, workspace)
    const values = viewValues(view, deriving, sample, workspace)
    if (values === null) return wholeVerdict(UNTOLD, 'procedure-undefined', limits.otherReading)
    if (!isPooled(quantity)) return judgeShape(limits, layout, values, offsets, workspace)
    const problem = formResiduals(quantity, values, sample, workspace.quantity)
    if (problem !== null) return wholeVerdict(UNTOLD, untoldFor(problem), limits.otherReading)
    return judgeShape(limits, layout, workspace.quantity, offsets, workspace)
  }
}
