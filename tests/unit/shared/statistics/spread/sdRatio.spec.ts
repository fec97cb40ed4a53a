import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fUpperPoint } from '#shared/statistics/distributions/f'
import { sdRatio, sdRatioKernel } from '#shared/statistics/spread/sdRatio'
import { createOutcome, createWorkspace } from '#shared/statistics/workspace'
import { normalSample } from '../../../../helpers/randomSamples'

const scaled = (sample: readonly number[], factor: number) => sample.map(x => factor * x)

describe('sdRatio', () => {
  it('is the largest over the smallest, whichever comes first', () => {
    expect(sdRatio([[0, 2], [0, 6], [0, 1]]).value).toBeWithinRelative(6, 1e-15)
    expect(sdRatio([[0, 1], [0, 6], [0, 2]]).value).toBeWithinRelative(6, 1e-15)
  })

  it('has the limits of F for the larger over the smaller when 1 is outside', () => {
    const [first, second] = [normalSample(12, 1), scaled(normalSample(30, 2), 10)]
    const result = sdRatio([first, second])
    expect(result.lower).toBeWithinRelative(result.value / Math.sqrt(fUpperPoint(0.025, 29, 11)), 1e-13)
    expect(result.upper).toBeWithinRelative(result.value * Math.sqrt(fUpperPoint(0.025, 11, 29)), 1e-13)
    expect(result.n).toBe(42)
  })

  it('begins at 1 when either group may have the larger spread, and reaches to the farther side', () => {
    const sample = normalSample(5, 3)
    const threefold = [...sample, ...sample, ...sample]
    // Estimate from 15 values the larger one: the five values may yet have the larger spread, by far more.
    const many = sdRatio([sample, scaled(threefold, 1.2)])
    expect(many.lower).toBe(1)
    expect(many.upper).toBeWithinRelative(Math.sqrt(fUpperPoint(0.025, 14, 4)) / many.value, 1e-13)
    const few = sdRatio([sample, scaled(threefold, 0.9)])
    expect(few.lower).toBe(1)
    expect(few.upper).toBeWithinRelative(few.value * Math.sqrt(fUpperPoint(0.025, 14, 4)), 1e-13)
  })

  it('covers the true ratio of normal groups at least 95 times in a hundred', () => {
    const repeats = 2000
    for (const truth of [1, 1.2, 2]) {
      const covered = Array.from({ length: repeats }, (_, seed) => {
        const { lower, upper } = sdRatio([normalSample(9, 2 * seed), scaled(normalSample(14, 2 * seed + 1), truth)])
        return lower! <= truth && truth <= upper!
      }).filter(Boolean).length / repeats
      expect(covered).toBeGreaterThan(0.935)
    }
  })

  it('has no limits for more than two groups', () => {
    expect(sdRatio([[1, 2, 4], [1, 2, 5], [1, 3, 9]])).toMatchObject({ lower: null, upper: null })
  })

  it('ignores origin and unit, and the order of the groups', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 1e6 }), (seed) => {
      const groups = [normalSample(6, seed), normalSample(11, seed + 1)]
      const expected = sdRatio(groups)
      for (const variant of [groups.toReversed(), groups.map((group, index) => group.map(x => 100 * index - 3 * x))]) {
        const result = sdRatio(variant)
        expect(result.value).toBeWithinRelative(expected.value, 1e-12)
        expect(result.lower).toBeWithinRelative(expected.lower!, 1e-12)
        expect(result.upper).toBeWithinRelative(expected.upper!, 1e-12)
      }
    }), { numRuns: 50 })
  })

  it('survives extreme sizes', () => {
    expect(sdRatio([[0, 1e200], [0, 3e200]]).value).toBeWithinRelative(3, 1e-14)
    expect(sdRatio([[0, 1e-200], [0, 3e-200]]).value).toBeWithinRelative(3, 1e-14)
  })

  it.each([
    ['too-few-groups', [[1, 2, 3]]],
    ['sample-too-small', [[1, 2], [3]]],
    ['non-finite-value', [[1, 2], [3, Infinity]]],
    ['non-finite-value', [[0, 1e-300], [0, 1e300]]],
    ['zero-spread', [[1, 2, 3], [3.7, 3.7, 3.7]]],
  ])('refuses %s', (code, groups) => {
    expect(() => sdRatio(groups)).toThrow(expect.objectContaining({ code }))
  })
})

describe('sdRatioKernel', () => {
  it('gives the figures of the public function from a workspace that has served other sizes', () => {
    const workspace = createWorkspace(60)
    const outcome = createOutcome()
    for (let n = 2; n < 30; n++) {
      const groups = [normalSample(n, n), normalSample(30, n + 100)]
      expect(sdRatioKernel(Float64Array.from(groups.flat()), Uint32Array.of(0, n, n + 30), workspace, outcome)).toBeNull()
      const { value, lower, upper } = sdRatio(groups)
      expect(outcome).toEqual({ statistic: value, lower, upper, pValue: Number.NaN, df1: Number.NaN, df2: Number.NaN })
    }
  })
})
