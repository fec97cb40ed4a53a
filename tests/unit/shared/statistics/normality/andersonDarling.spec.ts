import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { andersonDarling, andersonDarlingKernel } from '#shared/statistics/normality/andersonDarling'
import { createOutcome, createWorkspace } from '#shared/statistics/workspace'
import { exponentialSample, normalSample } from '../../../../helpers/randomSamples'

describe('andersonDarling', () => {
  it('ignores order, origin, unit and sign', () => {
    fc.assert(fc.property(fc.integer({ min: 0, max: 1e6 }), fc.integer({ min: 8, max: 80 }), (seed, n) => {
      const sample = exponentialSample(n, seed)
      const { statistic, pValue } = andersonDarling(sample)
      for (const same of [sample.toReversed(), sample.map(x => -3 - 0.5 * x), sample.map(x => 1e6 * x)]) {
        expect(andersonDarling(same).statistic).toBeWithinRelative(statistic, 1e-10)
        expect(andersonDarling(same).pValue).toBeWithinRelative(pValue, 1e-9)
      }
    }), { numRuns: 60 })
  })

  it('rejects normal samples as often as its level says', () => {
    const repeats = 2000
    const rejected = Array.from({ length: repeats }, (_, seed) => andersonDarling(normalSample(20, seed)).pValue < 0.05).filter(Boolean).length / repeats
    expect(Math.abs(rejected - 0.05)).toBeLessThan(0.015)
  })

  it('has its 5 % point at A* = 0.752', () => {
    // Samples on both sides of the published point (D'Agostino & Stephens 1986, table 4.7).
    for (let seed = 0; seed < 300; seed++) {
      const { adjusted, pValue } = andersonDarling(exponentialSample(12, seed))
      if (adjusted > 0.753) expect(pValue).toBeLessThan(0.0501)
      if (adjusted < 0.751) expect(pValue).toBeGreaterThan(0.0499)
    }
  })

  it('adjusts for the sample size', () => {
    const { statistic, adjusted } = andersonDarling(normalSample(10, 4))
    expect(adjusted).toBeWithinRelative(statistic * 1.0975, 1e-15)
  })

  it('stays finite where a tail underflows', () => {
    const { statistic, pValue } = andersonDarling([...new Array<number>(2999).fill(0), 1].map((x, index) => x + index * 1e-9))
    expect(Number.isFinite(statistic)).toBe(true)
    expect(statistic).toBeGreaterThan(1000)
    expect(pValue).toBe(3.7e-24)
  })

  it('survives extreme sizes', () => {
    const sample = exponentialSample(30, 5)
    const { statistic } = andersonDarling(sample)
    for (const unit of [1e-300, 1e-150, 1e150, 1e300]) expect(andersonDarling(sample.map(x => x * unit)).statistic).toBeWithinRelative(statistic, 1e-11)
  })

  it.each([
    ['sample-too-small', [1, 2, 3, 4, 5, 6, 7]],
    ['zero-spread', new Array<number>(8).fill(3.7)],
    ['non-finite-value', [1, 2, 3, 4, 5, 6, 7, Infinity]],
    ['non-finite-value', [-1.7e308, 0, 0, 0, 0, 0, 0, 1.7e308]],
  ])('refuses %s', (code, sample) => {
    expect(() => andersonDarling(sample)).toThrow(expect.objectContaining({ code }))
  })
})

describe('andersonDarlingKernel', () => {
  it('judges a stretch and leaves the values alone', () => {
    const values = Float64Array.from([99, ...exponentialSample(12, 8), -99])
    const before = values.slice()
    const outcome = createOutcome()
    expect(andersonDarlingKernel(values, 1, 13, createWorkspace(12), outcome)).toBeNull()
    const { statistic, pValue } = andersonDarling(exponentialSample(12, 8))
    expect(outcome).toMatchObject({ statistic, pValue, df1: Number.NaN, lower: Number.NaN })
    expect(values).toEqual(before)
  })
})
