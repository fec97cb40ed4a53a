import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { brownForsythe, brownForsytheKernel } from '#shared/statistics/spread/brownForsythe'
import { createOutcome, createWorkspace } from '#shared/statistics/workspace'
import { exponentialSample, normalSample } from '../../../../helpers/randomSamples'

const groupsOf = (seed: number, sizes: readonly number[]) => sizes.map((n, index) => exponentialSample(n, seed + index))

describe('brownForsythe', () => {
  it('follows its definition by hand', () => {
    // Distances from the medians 2 and 4: 1 0 1 and 4 0 2. Means 2/3 and 2, grand mean 4/3:
    // between = 2 * 3 * (2/3)^2 = 8/3, within = 2/3 + 8, F = (8/3) / (26/3/4) = 16/13.
    const result = brownForsythe([[1, 2, 3], [0, 4, 6]])
    expect(result).toMatchObject({ df1: 1, df2: 4, n: 6 })
    expect(result.statistic).toBeWithinRelative(16 / 13, 1e-14)
  })

  it('ignores order, origin and unit, and where each group lies', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 1e6 }), fc.array(fc.integer({ min: 3, max: 20 }), { minLength: 2, maxLength: 5 }), (seed, sizes) => {
      const groups = groupsOf(seed, sizes)
      const { statistic, pValue } = brownForsythe(groups)
      const same = [
        groups.map(group => group.toReversed()),
        groups.toReversed(),
        groups.map(group => group.map(x => 32 - 1.8 * x)),
        groups.map((group, index) => group.map(x => x + 10 * index)),
      ]
      for (const variant of same) {
        expect(brownForsythe(variant).statistic).toBeWithinRelative(statistic, 1e-8)
        expect(brownForsythe(variant).pValue).toBeWithinRelative(pValue, 1e-8)
      }
    }), { numRuns: 60 })
  })

  it('is 0 with p = 1 for groups that are spread alike', () => {
    expect(brownForsythe([[1, 2, 4], [11, 12, 14]])).toMatchObject({ statistic: 0, pValue: 1 })
  })

  it('is conservative in small normal groups: about .036 at 10 and 10', () => {
    const repeats = 4000
    const rejected = Array.from({ length: repeats }, (_, seed) => brownForsythe([normalSample(10, 2 * seed), normalSample(10, 2 * seed + 1)]).pValue < 0.05).filter(Boolean).length / repeats
    expect(Math.abs(rejected - 0.036)).toBeLessThan(0.012)
  })

  it('survives extreme sizes', () => {
    const groups = groupsOf(3, [8, 9])
    const { statistic } = brownForsythe(groups)
    for (const unit of [1e-300, 1e-160, 1e160, 1e300]) {
      expect(brownForsythe(groups.map(group => group.map(x => x * unit))).statistic).toBeWithinRelative(statistic, 1e-12)
    }
  })

  it.each([
    ['too-few-groups', [[1, 2, 3]]],
    ['too-few-groups', []],
    ['sample-too-small', [[1, 2], [3]]],
    ['non-finite-value', [[1, 2], [3, Number.NaN]]],
    ['non-finite-value', [[1, 2, 3], [-1.7e308, 0, 1.7e308]]],
    ['zero-spread', [[5, 5, 5], [7, 7, 7]]],
  ])('refuses %s', (code, groups) => {
    expect(() => brownForsythe(groups)).toThrow(expect.objectContaining({ code }))
  })

  it.each([
    ['two values in each group', [[1.1, 2.3], [0.7, 9.4], [5.2, 5.9]]],
    ['pairs of equal decimals', [[0.1, 0.1, 0.3, 0.3], [1.1, 1.1, 1.4, 1.4]]],
    ['six distances of 0.1, whose mean rounds', [[0, 0, 0, 0.2, 0.2, 0.2], [5, 5, 5, 5, 5.2, 5.2, 5.2, 5.2]]],
    ['two values and a constant group', [[0.3, 0.9], [3.7, 3.7, 3.7]]],
  ])('refuses %s: distances within groups are equal, only rounding is left', (_, groups) => {
    expect(() => brownForsythe(groups)).toThrow(expect.objectContaining({ code: 'zero-spread' }))
  })
})

describe('brownForsytheKernel', () => {
  it('gives the figures of the public function, leaves the values alone, and serves again', () => {
    const workspace = createWorkspace(40)
    const outcome = createOutcome()
    for (let seed = 0; seed < 20; seed++) {
      const groups = groupsOf(seed, [7, 12, 5])
      const values = Float64Array.from(groups.flat())
      const before = values.slice()
      expect(brownForsytheKernel(values, Uint32Array.of(0, 7, 19, 24), workspace, outcome)).toBeNull()
      const { statistic, df1, df2, pValue } = brownForsythe(groups)
      expect(outcome).toEqual({ statistic, df1, df2, pValue, lower: Number.NaN, upper: Number.NaN })
      expect(values).toEqual(before)
    }
  })

  it('refuses without throwing', () => {
    const refusal = (sample: number[], offsets: number[]) => brownForsytheKernel(Float64Array.from(sample), Uint32Array.from(offsets), createWorkspace(10), createOutcome())
    expect(refusal([1, 2], [0, 2])).toBe('too-few-groups')
    expect(refusal([1, 2, 3], [0, 2, 3])).toBe('sample-too-small')
    expect(refusal([1, 1, 2, 2], [0, 2, 4])).toBe('zero-spread')
  })
})
