import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { shapiroWilk, shapiroWilkKernel } from '#shared/statistics/normality/shapiroWilk'
import { shapiroWilkWeights } from '#shared/statistics/normality/shapiroWilkWeights'
import { createOutcome, createWorkspace } from '#shared/statistics/workspace'
import { exponentialSample, normalSample } from '../../../../helpers/randomSamples'

describe('shapiroWilk', () => {
  it('ignores order, origin, unit and sign', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 1e6 }), fc.integer({ min: 3, max: 80 }), (seed, n) => {
      const sample = exponentialSample(n, seed)
      const { statistic, pValue } = shapiroWilk(sample)
      for (const same of [sample.toReversed(), sample.map(x => -3 - 0.5 * x), sample.map(x => 1e6 * x)]) {
        expect(shapiroWilk(same).statistic).toBeWithinRelative(statistic, 1e-12)
        expect(shapiroWilk(same).pValue).toBeWithinRelative(pValue, 1e-8)
      }
    }), { numRuns: 60 })
  })

  it('keeps within its published bounds: n a1^2/(n - 1) <= W <= 1, 0 <= p <= 1', () => {
    fc.assert(fc.property(fc.array(fc.integer({ min: -5, max: 5 }), { minLength: 3, maxLength: 40 }), (sample) => {
      fc.pre(new Set(sample).size > 1)
      const n = sample.length
      const { statistic, pValue } = shapiroWilk(sample)
      expect(statistic).toBeGreaterThanOrEqual(n * shapiroWilkWeights(n)[0]! ** 2 / (n - 1) - 1e-12)
      expect(statistic).toBeLessThanOrEqual(1)
      expect(pValue).toBeGreaterThanOrEqual(0)
      expect(pValue).toBeLessThanOrEqual(1)
    }))
  })

  it('has p uniform under normality and small under skewness', () => {
    const repeats = 2000
    const rejected = (sample: (n: number, seed: number) => number[], n: number) =>
      Array.from({ length: repeats }, (_, seed) => shapiroWilk(sample(n, seed)).pValue < 0.05).filter(Boolean).length / repeats
    expect(Math.abs(rejected(normalSample, 20) - 0.05)).toBeLessThan(0.015)
    expect(Math.abs(rejected(normalSample, 8) - 0.05)).toBeLessThan(0.015)
    // Power against the exponential at n = 20 is .834 by simulation of 40 000 samples in R.
    expect(Math.abs(rejected(exponentialSample, 20) - 0.834)).toBeLessThan(0.03)
  })

  it('is 1 with p = 1 for three equally spaced values', () => {
    expect(shapiroWilk([1, 2, 3])).toEqual({ statistic: 1, pValue: expect.closeTo(1, 12), n: 3 })
  })

  it('reaches p = 0 at the least W of three values', () => {
    const { statistic, pValue } = shapiroWilk([0, 0, 1])
    expect(statistic).toBeWithinRelative(0.75, 1e-15)
    expect(pValue).toBeLessThan(1e-15)
  })

  it.each([4, 5, 6, 7, 8, 9, 10, 11])('never leaves the domain of the transformation, n = %d', (n) => {
    const sample = [...new Array<number>(n - 1).fill(0), 1]
    const { statistic, pValue } = shapiroWilk(sample)
    expect(statistic).toBeWithinRelative(n * shapiroWilkWeights(n)[0]! ** 2 / (n - 1), 1e-12)
    expect(Math.log(1 - statistic)).toBeLessThan(-2.273 + 0.459 * n)
    expect(pValue).toBeGreaterThan(0)
    expect(pValue).toBeLessThan(0.002)
  })

  it('survives extreme sizes', () => {
    const sample = exponentialSample(30, 5)
    const { statistic } = shapiroWilk(sample)
    for (const unit of [1e-300, 1e-150, 1e150, 1e300]) expect(shapiroWilk(sample.map(x => x * unit)).statistic).toBeWithinRelative(statistic, 1e-12)
  })

  it.each([
    ['sample-too-small', [1, 2]],
    ['sample-too-large', Array.from({ length: 5001 }, (_, index) => index)],
    ['zero-spread', [5, 5, 5]],
    ['zero-spread', [0.3, 0.1 + 0.2, 0.3]],
    ['non-finite-value', [1, 2, Number.NaN]],
    ['non-finite-value', [-1.7e308, 0, 1.7e308]],
  ])('refuses %s', (code, sample) => {
    expect(() => shapiroWilk(sample)).toThrow(expect.objectContaining({ code }))
  })
})

describe('shapiroWilkKernel', () => {
  it('judges a stretch and leaves the values alone', () => {
    const values = Float64Array.from([99, ...exponentialSample(12, 8), -99])
    const before = values.slice()
    const outcome = createOutcome()
    expect(shapiroWilkKernel(values, 1, 13, createWorkspace(12), outcome)).toBeNull()
    const { statistic, pValue } = shapiroWilk(exponentialSample(12, 8))
    expect(outcome).toEqual({ statistic, pValue, df1: Number.NaN, df2: Number.NaN, lower: Number.NaN, upper: Number.NaN })
    expect(values).toEqual(before)
  })

  it('gives the same figures from a workspace that has served other sizes, and keeps it bounded', () => {
    const workspace = createWorkspace(120)
    const outcome = createOutcome()
    for (let n = 3; n <= 120; n++) {
      const sample = normalSample(n, n)
      shapiroWilkKernel(Float64Array.from(sample), 0, n, workspace, outcome)
      expect(outcome.pValue).toBe(shapiroWilk(sample).pValue)
      expect(workspace.shapiroWilkWeights.size).toBeLessThanOrEqual(32)
    }
  })
})

describe('shapiroWilkWeights', () => {
  it.each([4, 5, 6, 7, 12, 50, 999, 5000])('have squares that add up to one half and fall from the outside in, n = %d', (n) => {
    const weights = [...shapiroWilkWeights(n)]
    expect(weights).toHaveLength(Math.floor(n / 2))
    expect(weights.reduce((sum, weight) => sum + weight * weight, 0)).toBeWithinRelative(0.5, 1e-12)
    expect(weights.every((weight, index) => weight > 0 && (index === 0 || weight < weights[index - 1]!))).toBe(true)
  })

  it('are near the exact ones of Shapiro & Wilk (1965), table 5', () => {
    const published = { 5: [0.6646, 0.2413], 10: [0.5739, 0.3291, 0.2141, 0.1224, 0.0399], 20: [0.4734, 0.3211, 0.2565, 0.2085, 0.1686, 0.1334, 0.1013, 0.0711, 0.0422, 0.0140] }
    for (const [n, weights] of Object.entries(published)) {
      shapiroWilkWeights(Number(n)).forEach((weight, index) => expect(Math.abs(weight - weights[index]!)).toBeLessThan(0.002))
    }
  })
})
