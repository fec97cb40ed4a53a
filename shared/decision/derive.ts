import ln from '@stdlib/math-base-special-ln'
import { type Deriving, type RuleSample, sizeOf, type View, type Workspace } from './rule'

const LN_2 = 0.6931471805599453
const LN_10 = 2.302585092994046
const SCALE = { e: 1, 2: LN_2, 10: LN_10 } as const

/** NaN where the logarithm does not exist. */
function transform(x: number, { base, shift }: View): number {
  if (base === null) return x
  const shifted = x + shift
  return shifted > 0 ? ln(shifted) / SCALE[base] : Number.NaN
}

/** A transformation acts before the derivation: the change of a logarithm is the logarithm of a ratio. */
function derive(value: number, baseline: number, { derivation }: Deriving, view: View): number {
  if (derivation === 'none') return transform(value, view)
  const change = transform(value, view) - transform(baseline, view)
  return derivation === 'percent-change' ? 100 * change / baseline : change
}

/** Values of a view, made on first use in a run; null when one of them has no transform. */
export function viewValues(index: number, rule: Deriving, sample: RuleSample, workspace: Workspace): Float64Array | null {
  const state = workspace.views[index]
  const view = rule.views[index]
  if (state === undefined || view === undefined) throw new RangeError(`no view ${index}`)
  if (!state.ready) {
    const { value, baseline, first, firstBaseline } = sample
    const n = sizeOf(sample)
    let defined = true
    for (let i = 0; i < n; i++) {
      const second = derive(value[i] ?? Number.NaN, baseline?.[i] ?? Number.NaN, rule, view)
      const x = first === null ? second : second - derive(first[i] ?? Number.NaN, firstBaseline?.[i] ?? Number.NaN, rule, view)
      state.values[i] = x
      defined &&= Number.isFinite(x)
    }
    state.ready = true
    state.defined = defined
  }
  return state.defined ? state.values : null
}
