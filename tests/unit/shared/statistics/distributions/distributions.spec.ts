import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { betaQuantile } from '#shared/statistics/distributions/beta'
import { fCdf, fQuantile, fSf, fUpperPoint } from '#shared/statistics/distributions/f'
import { normalCdf, normalLogCdf, normalQuantile, normalSf } from '#shared/statistics/distributions/normal'
import { tCdf, tQuantile, tSf } from '#shared/statistics/distributions/t'

const degrees = fc.integer({ min: 1, max: 500 })

describe('normal distribution', () => {
  it('has tails that are computed, not subtracted', () => {
    expect(normalSf(20)).toBeWithinRelative(2.7536241186062337e-89, 1e-12)
    expect(normalSf(-1.5)).toBe(normalCdf(1.5))
    expect(normalCdf(0)).toBe(0.5)
  })

  it('answers at its ends and NaN outside', () => {
    expect([normalCdf(-Infinity), normalCdf(Infinity), normalSf(Infinity)]).toEqual([0, 1, 0])
    expect([normalQuantile(0), normalQuantile(0.5), normalQuantile(1)]).toEqual([-Infinity, 0, Infinity])
    expect([normalQuantile(-0.1), normalQuantile(1.1), normalQuantile(Number.NaN), normalCdf(Number.NaN)]).toEqual(new Array(4).fill(Number.NaN))
  })

  it('has a quantile that its tails undo', () => {
    fc.assert(fc.property(fc.double({ min: 1e-300, max: 1, noNaN: true, maxExcluded: true }), (p) => {
      expect(normalCdf(normalQuantile(p))).toBeWithinRelative(p, 1e-10)
    }))
  })

  it('has a logarithm that joins at the change of formula and stays finite', () => {
    expect(normalLogCdf(-20 - 1e-9)).toBeWithinRelative(normalLogCdf(-20 + 1e-9), 1e-9)
    expect(normalLogCdf(-1e5)).toBeWithinRelative(-5e9, 1e-8)
    expect(normalLogCdf(40)).toBe(-0)
  })
})

describe('t distribution', () => {
  it('is the Cauchy distribution at df = 1 and has its closed form at df = 2', () => {
    expect(tSf(1, 1)).toBeWithinRelative(0.25, 1e-14)
    expect(tCdf(2, 2)).toBeWithinRelative(0.5 + 2 / (2 * Math.sqrt(6)), 1e-14)
    expect(tSf(1e8, 2)).toBeWithinRelative(5e-17, 1e-12)
  })

  it('has a quantile that its tail undoes', () => {
    fc.assert(fc.property(degrees, fc.double({ min: 1e-12, max: 0.49, noNaN: true }), (df, p) => {
      expect(tCdf(tQuantile(p, df), df)).toBeWithinRelative(p, 1e-10)
      expect(tSf(-tQuantile(p, df), df)).toBeWithinRelative(p, 1e-10)
    }))
  })

  it('is NaN outside its domain', () => {
    expect([tCdf(1, 0), tCdf(Number.NaN, 3), tQuantile(1.5, 3), tQuantile(0.5, -1)]).toEqual(new Array(4).fill(Number.NaN))
  })
})

describe('F distribution', () => {
  it('has its closed form at df1 = 2, far into the tail', () => {
    for (const x of [0.1, 1, 7, 60, 1e4, 1e20]) expect(fSf(x, 2, 60)).toBeWithinRelative((1 + x / 30) ** -30, 1e-11)
  })

  it('is the square of t at df1 = 1', () => {
    fc.assert(fc.property(degrees, fc.double({ min: 1e-3, max: 40, noNaN: true }), (df, t) => {
      expect(fSf(t * t, 1, df)).toBeWithinRelative(2 * tSf(t, df), 1e-10)
    }))
  })

  it('has tails that exchange with the degrees of freedom', () => {
    fc.assert(fc.property(degrees, degrees, fc.double({ min: 1e-2, max: 100, noNaN: true }), (df1, df2, x) => {
      const tail = fSf(x, df1, df2)
      if (tail > 1e-290) expect(fCdf(1 / x, df2, df1)).toBeWithinRelative(tail, 1e-9)
    }))
  })

  it('has quantiles that its tails undo', () => {
    fc.assert(fc.property(degrees, degrees, fc.double({ min: 1e-6, max: 0.5, noNaN: true }), (df1, df2, p) => {
      expect(fCdf(fQuantile(p, df1, df2), df1, df2)).toBeWithinRelative(p, 1e-9)
      expect(fSf(fUpperPoint(p, df1, df2), df1, df2)).toBeWithinRelative(p, 1e-9)
    }))
  })

  it('answers at its ends and NaN outside', () => {
    expect([fSf(0, 2, 3), fSf(-1, 2, 3), fSf(Infinity, 2, 3), fCdf(0, 2, 3), fCdf(Infinity, 2, 3)]).toEqual([1, 1, 0, 0, 1])
    expect([fSf(Number.NaN, 2, 3), fCdf(1, Number.NaN, 3), fSf(1, 2, -3), fQuantile(2, 1, 1)]).toEqual(new Array(4).fill(Number.NaN))
  })
})

describe('beta quantile', () => {
  it('has its closed forms', () => {
    expect(betaQuantile(0.3, 1, 1)).toBeWithinRelative(0.3, 1e-14)
    expect(betaQuantile(0.025, 1, 50)).toBeWithinRelative(1 - 0.975 ** (1 / 50), 1e-13)
    expect(betaQuantile(0.025, 50, 1)).toBeWithinRelative(0.025 ** (1 / 50), 1e-14)
    expect([betaQuantile(0, 2, 3), betaQuantile(1, 2, 3)]).toEqual([0, 1])
  })
})
