import { describe, expect, it } from 'vitest'
import { fCdf, fQuantile, fSf, fUpperPoint } from '#shared/statistics/distributions/f'
import { normalCdf, normalLogCdf, normalQuantile, normalSf } from '#shared/statistics/distributions/normal'
import { tCdf, tQuantile, tSf } from '#shared/statistics/distributions/t'
import distributions from './fixtures/distributions.json'
import exact from './fixtures/exact.json'

// Expected values: R's p and q functions (scripts/reference/distributions.R) and mpmath with 60 digits
// (scripts/reference/exact.py). Tolerances are relative, in the far tails too.

describe('normal distribution', () => {
  it.each(distributions.normal.tails)('tails at $z', ({ z, cdf, sf, logCdf }) => {
    expect(normalCdf(z)).toBeWithinRelative(cdf, 1e-12)
    expect(normalSf(z)).toBeWithinRelative(sf, 1e-12)
    expect(normalLogCdf(z)).toBeWithinRelative(logCdf, 1e-12)
  })

  it.each(distributions.normal.quantiles)('quantile at $p', ({ p, z }) => {
    expect(normalQuantile(p)).toBeWithinRelative(z, p < 1e-100 ? 1e-13 : 1e-15)
  })

  it.each(exact.normalQuantiles)('quantile at $p against mpmath', ({ p, z }) => {
    expect(normalQuantile(p)).toBeWithinRelative(z, p < 1e-100 ? 1e-13 : 1e-15)
  })

  it.each(exact.normalLogCdf)('logarithm of the lower tail at $z against mpmath', ({ z, value }) => {
    expect(normalLogCdf(z)).toBeWithinRelative(value, 1e-13)
  })
})

describe('t distribution', () => {
  it('has the tails of R', () => {
    for (const { x, df, cdf, sf } of distributions.t.tails) {
      expect(tCdf(x, df), `cdf ${x}, ${df}`).toBeWithinRelative(cdf, 1e-11)
      expect(tSf(x, df), `sf ${x}, ${df}`).toBeWithinRelative(sf, 1e-11)
    }
  })

  it('has the quantiles of R', () => {
    for (const { p, df, x } of distributions.t.quantiles) {
      if (p === 0.5) expect(tQuantile(p, df)).toBeCloseTo(0, 15)
      else expect(tQuantile(p, df), `${p}, ${df}`).toBeWithinRelative(x, 1e-11)
    }
  })
})

describe('F distribution', () => {
  it('has the tails of R', () => {
    for (const { x, df1, df2, cdf, sf } of distributions.f.tails) {
      expect(fCdf(x, df1, df2), `cdf ${x}, ${df1}, ${df2}`).toBeWithinRelative(cdf, 1e-10)
      expect(fSf(x, df1, df2), `sf ${x}, ${df1}, ${df2}`).toBeWithinRelative(sf, 1e-10)
    }
  })

  it('has the quantiles of R, to the digits that R has', () => {
    for (const { p, df1, df2, x, upper } of distributions.f.quantiles) {
      expect(fQuantile(p, df1, df2), `${p}, ${df1}, ${df2}`).toBeWithinRelative(x, 1e-8)
      expect(fUpperPoint(p, df1, df2), `upper ${p}, ${df1}, ${df2}`).toBeWithinRelative(upper, 1e-8)
    }
  })

  it('has the tails of mpmath', () => {
    for (const { x, df1, df2, sf } of exact.fTails) expect(fSf(x, df1, df2), `${x}, ${df1}, ${df2}`).toBeWithinRelative(sf, 1e-11)
  })

  it('has the quantiles of mpmath', () => {
    for (const { p, df1, df2, x } of exact.fQuantiles) expect(fQuantile(p, df1, df2), `${p}, ${df1}, ${df2}`).toBeWithinRelative(x, 1e-13)
  })

  it('has the upper points of mpmath', () => {
    for (const { q, df1, df2, x } of exact.fUpperPoints) expect(fUpperPoint(q, df1, df2), `${q}, ${df1}, ${df2}`).toBeWithinRelative(x, 1e-13)
  })
})
