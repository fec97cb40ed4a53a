import jstat from 'jstat'
import { mean as mathMean, median as mathMedian, quantileSeq, std, variance as mathVariance } from 'mathjs'
import { describe, expect, it } from 'vitest'
import { excessKurtosis } from '#shared/statistics/descriptive/excessKurtosis'
import { mean } from '#shared/statistics/descriptive/mean'
import { median } from '#shared/statistics/descriptive/median'
import { quantile } from '#shared/statistics/descriptive/quantile'
import { skewness } from '#shared/statistics/descriptive/skewness'
import { standardDeviation } from '#shared/statistics/descriptive/standardDeviation'
import { variance } from '#shared/statistics/descriptive/variance'
import { fCdf, fQuantile } from '#shared/statistics/distributions/f'
import { normalCdf, normalQuantile } from '#shared/statistics/distributions/normal'
import { tCdf, tQuantile } from '#shared/statistics/distributions/t'
import { lattice } from './lattice'

// jstat and mathjs as an independent second route, to the digits that they hold themselves
// (docs/decisions/0001-accurate-distributions.md): jstat 1e-6 in the body of t and F, mathjs all.

const { jStat } = jstat
const samples = ['uniform', 'skewed', 'heavy', 'bell', 'coarse'].map(shape => ({ shape, sample: lattice(shape, 57) }))

describe('moments and quantiles by mathjs and jstat', () => {
  it.each(samples)('$shape', ({ sample }) => {
    const n = sample.length
    expect(mean(sample)).toBeWithinRelative(mathMean(sample), 1e-13)
    expect(variance(sample)).toBeWithinRelative(Number(mathVariance(sample)), 1e-13)
    expect(standardDeviation(sample)).toBeWithinRelative(Number(std(sample)), 1e-13)
    expect(median(sample)).toBeWithinRelative(mathMedian(sample), 1e-15)
    expect(quantile(sample, 0.3)).toBeWithinRelative(Number(quantileSeq(sample, 0.3)), 1e-13)
    expect(skewness(sample).value).toBeWithinRelative(jStat.skewness(sample) * Math.sqrt(n * (n - 1)) / (n - 2), 1e-10)
    expect(excessKurtosis(sample).value).toBeWithinRelative((n - 1) / ((n - 2) * (n - 3)) * ((n + 1) * jStat.kurtosis(sample) + 6), 1e-10)
  })
})

describe('distributions by jstat', () => {
  it.each([-2.5, -1, -0.1, 0.3, 1.7])('lower tails at %d', (x) => {
    expect(normalCdf(x)).toBeWithinRelative(jStat.normal.cdf(x, 0, 1), 1e-12)
    for (const df of [1, 5, 18, 120]) expect(tCdf(x, df)).toBeWithinRelative(jStat.studentt.cdf(x, df), 1e-6)
    for (const [df1, df2] of [[1, 18], [2, 27], [9, 90]] as const) {
      expect(fCdf(Math.abs(x), df1, df2)).toBeWithinRelative(jStat.centralF.cdf(Math.abs(x), df1, df2), 1e-6)
    }
  })

  it.each([0.025, 0.2, 0.8, 0.975])('quantiles at %d', (p) => {
    expect(normalQuantile(p)).toBeWithinRelative(jStat.normal.inv(p, 0, 1), 1e-11)
    expect(tQuantile(p, 18)).toBeWithinRelative(jStat.studentt.inv(p, 18), 1e-6)
    expect(fQuantile(p, 9, 9)).toBeWithinRelative(jStat.centralF.inv(p, 9, 9), 1e-6)
  })
})
