import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { excessKurtosis, excessKurtosisStandardError } from '#shared/statistics/descriptive/excessKurtosis'
import { mean } from '#shared/statistics/descriptive/mean'
import { skewness, skewnessKernel, skewnessStandardError } from '#shared/statistics/descriptive/skewness'
import { standardDeviation } from '#shared/statistics/descriptive/standardDeviation'
import { variance } from '#shared/statistics/descriptive/variance'
import { createOutcome } from '#shared/statistics/workspace'
import { exponentialSample, normalSample } from '../../../../helpers/randomSamples'

describe('mean, variance, standardDeviation', () => {
  it('are exact for small whole numbers', () => {
    expect(mean([2, 4, 4, 4, 5, 5, 7, 9])).toBe(5)
    expect(variance([1, 2, 3, 4, 5])).toBe(2.5)
    expect(standardDeviation([1, 3])).toBe(Math.SQRT2)
  })

  it('find no spread in equal values, which rounding would make positive', () => {
    const constant = new Array<number>(12).fill(3.7)
    expect(mean(constant)).toBe(3.7)
    expect(variance(constant)).toBe(0)
    expect(standardDeviation(constant)).toBe(0)
  })

  it('do not lose the spread far away from zero', () => {
    expect(variance([1e9 + 4, 1e9 + 7, 1e9 + 13, 1e9 + 16])).toBe(30)
  })

  it('do not gather rounding over many values', () => {
    const sample = [0, ...new Array<number>(99999).fill(0.1)]
    expect(mean(sample)).toBeWithinRelative(0.099999, 1e-15)
    expect(variance(sample)).toBeWithinRelative(1e-7, 1e-11)
  })

  it('reach sizes whose squares overflow or vanish', () => {
    expect(standardDeviation([-1e200, 1e200])).toBeWithinRelative(Math.SQRT2 * 1e200, 1e-15)
    expect(standardDeviation([0, 1e-200])).toBeWithinRelative(Math.SQRT1_2 * 1e-200, 1e-15)
    expect(() => variance([-1e200, 1e200])).toThrow(expect.objectContaining({ code: 'non-finite-value' }))
    expect(() => standardDeviation([-1e308, 1e308])).toThrow(expect.objectContaining({ code: 'non-finite-value' }))
  })

  it.each([
    ['mean', () => mean([])],
    ['variance', () => variance([1])],
    ['standardDeviation', () => standardDeviation([1])],
  ])('%s refuses too few values', (_, attempt) => {
    expect(attempt).toThrow(expect.objectContaining({ code: 'sample-too-small' }))
  })
})

describe('skewness and excess kurtosis', () => {
  it('are 0 skewness for a symmetric sample and of opposite sign for its mirror image', () => {
    expect(skewness([-3, -1, 0, 1, 3]).value).toBe(0)
    const sample = exponentialSample(30, 1)
    expect(skewness(sample.map(x => -x)).value).toBe(-skewness(sample).value)
    expect(excessKurtosis(sample.map(x => -x)).value).toBe(excessKurtosis(sample).value)
  })

  it('follow their definitions by hand', () => {
    // 2, 3, 7: mean 4, m2 = 14/3, m3 = 18/3; G1 = m3/m2^1.5 * sqrt(6)/1.
    expect(skewness([2, 3, 7]).value).toBeWithinRelative(6 / (14 / 3) ** 1.5 * Math.sqrt(6), 1e-14)
    // 1, 2, 3, 4: m2 = 5/4, m4 = 41/16, g2 = 41/25 - 3; G2 = 3/2 * (5 g2 + 6) = -6/5.
    expect(excessKurtosis([1, 2, 3, 4]).value).toBeWithinRelative(-1.2, 1e-14)
  })

  it('reach their bounds, sqrt(n) and n, with one value apart from the others', () => {
    const sample = [...new Array<number>(19).fill(2), 5]
    expect(skewness(sample).value).toBeWithinRelative(Math.sqrt(20), 1e-13)
    expect(excessKurtosis(sample).value).toBeWithinRelative(20, 1e-13)
  })

  it('ignore a change of origin and unit', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 1e6 }), fc.integer({ min: 4, max: 60 }), (seed, n) => {
      const sample = exponentialSample(n, seed)
      const rescaled = sample.map(x => 32 + 1.8 * x)
      expect(skewness(rescaled).value).toBeWithinRelative(skewness(sample).value, 1e-9)
      expect(Math.abs(excessKurtosis(rescaled).value - excessKurtosis(sample).value)).toBeLessThan(1e-9)
    }), { numRuns: 50 })
  })

  it('have limits 1.96 standard errors away', () => {
    const { value, lower, upper, standardError } = skewness(normalSample(25, 3))
    expect(standardError).toBe(skewnessStandardError(25))
    expect(upper - value).toBeWithinRelative(1.96 * standardError, 1e-14)
    expect(value - lower).toBeWithinRelative(1.96 * standardError, 1e-14)
    const kurtosis = excessKurtosis(normalSample(25, 3))
    expect(kurtosis.upper - kurtosis.lower).toBeWithinRelative(2 * 1.96 * excessKurtosisStandardError(25), 1e-14)
  })

  it('vary in normal samples as their standard errors say', () => {
    const repeats = 4000
    const sizes = [6, 20]
    for (const n of sizes) {
      const g1 = Array.from({ length: repeats }, (_, seed) => skewness(normalSample(n, seed)).value)
      const g2 = Array.from({ length: repeats }, (_, seed) => excessKurtosis(normalSample(n, seed)).value)
      expect(standardDeviation(g1)).toBeWithinRelative(skewnessStandardError(n), 0.04)
      expect(standardDeviation(g2)).toBeWithinRelative(excessKurtosisStandardError(n), 0.06)
      expect(Math.abs(mean(g2))).toBeLessThan(0.1)
    }
  })

  it('have the standard errors of the usual tables', () => {
    // n = 30: 0.4269 and 0.8327, as printed with type 2 moments.
    expect(skewnessStandardError(30)).toBeCloseTo(0.4269, 4)
    expect(excessKurtosisStandardError(30)).toBeCloseTo(0.8327, 4)
    // The kurtosis error is 2 SE(G1) sqrt((n^2 - 1)/((n - 3)(n + 5))).
    expect(excessKurtosisStandardError(17)).toBeWithinRelative(2 * skewnessStandardError(17) * Math.sqrt(288 / (14 * 22)), 1e-14)
  })

  it('survive extreme sizes', () => {
    const sample = [1, 2, 4, 9]
    for (const unit of [1e-150, 1e150, 1e300]) {
      expect(skewness(sample.map(x => x * unit)).value).toBeWithinRelative(skewness(sample).value, 1e-13)
      expect(excessKurtosis(sample.map(x => x * unit)).value).toBeWithinRelative(excessKurtosis(sample).value, 1e-13)
    }
  })

  it.each([
    ['sample-too-small', [1, 2]],
    ['zero-spread', [3.7, 3.7, 3.7, 3.7]],
    ['non-finite-value', [1, 2, Number.NaN]],
    ['non-finite-value', [-1e308, 0, 1e308]],
  ])('skewness refuses %s', (code, sample) => {
    expect(() => skewness(sample)).toThrow(expect.objectContaining({ code }))
  })

  it.each([
    ['sample-too-small', [1, 2, 3]],
    ['zero-spread', [3.7, 3.7, 3.7, 3.7]],
    ['non-finite-value', [-1e308, 0, 0, 1e308]],
  ])('excessKurtosis refuses %s', (code, sample) => {
    expect(() => excessKurtosis(sample)).toThrow(expect.objectContaining({ code }))
  })

  it('leave no figure of an earlier procedure in the outcome', () => {
    const outcome = { ...createOutcome(), pValue: 0.5, df1: 3, df2: 4 }
    expect(skewnessKernel(Float64Array.of(1, 2, 4), 0, 3, outcome)).toBeNull()
    expect([outcome.pValue, outcome.df1, outcome.df2]).toEqual([Number.NaN, Number.NaN, Number.NaN])
  })
})
