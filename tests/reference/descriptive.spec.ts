import { describe, expect, it } from 'vitest'
import { excessKurtosis } from '#shared/statistics/descriptive/excessKurtosis'
import { histogramBins, MOST_BINS } from '#shared/statistics/descriptive/histogramBins'
import { mean } from '#shared/statistics/descriptive/mean'
import { median } from '#shared/statistics/descriptive/median'
import { normalQuantilePlot } from '#shared/statistics/descriptive/normalQuantilePlot'
import { quantile } from '#shared/statistics/descriptive/quantile'
import { skewness } from '#shared/statistics/descriptive/skewness'
import { standardDeviation } from '#shared/statistics/descriptive/standardDeviation'
import { variance } from '#shared/statistics/descriptive/variance'
import { bonferroni } from '#shared/statistics/multiplicity/bonferroni'
import { holm } from '#shared/statistics/multiplicity/holm'
import descriptive from './fixtures/descriptive.json'
import exact from './fixtures/exact.json'

// Expected values: R (scripts/reference/descriptive.R); far from zero: exact rational arithmetic on the doubles
// (scripts/reference/exact.py).

describe('moments and quantiles agree with R', () => {
  it.each(descriptive.cases)('$name', ({ values, ...expected }) => {
    expect(mean(values)).toBeWithinRelative(expected.mean, 1e-14)
    expect(variance(values)).toBeWithinRelative(expected.variance, 1e-14)
    expect(standardDeviation(values)).toBeWithinRelative(Math.sqrt(expected.variance), 1e-14)
    expect(median(values)).toBeWithinRelative(expected.median, 1e-15)
    expect(skewness(values).value).toBeWithinRelative(expected.skewness, 1e-12)
    if (expected.excessKurtosis !== null) expect(excessKurtosis(values).value).toBeWithinRelative(expected.excessKurtosis, 1e-12)
    descriptive.probabilities.forEach((p, index) => {
      expect(quantile(values, p)).toBeWithinRelative(expected.quantiles[index]!, 1e-14)
    })
  })

  it('keep their digits at 1e9 with a spread of 1e-3', () => {
    const { values, ...expected } = exact.offset
    expect(mean(values)).toBeWithinRelative(expected.mean, 2e-16)
    expect(variance(values)).toBeWithinRelative(expected.variance, 1e-14)
    expect(skewness(values).value).toBeWithinRelative(expected.skewness, 1e-13)
    expect(excessKurtosis(values).value).toBeWithinRelative(expected.excessKurtosis, 1e-13)
  })
})

describe('normalQuantilePlot agrees with R', () => {
  it.each(descriptive.plots)('positions and band for n = $n', ({ n, theoretical, low, high }) => {
    const sample = Array.from({ length: n }, (_, index) => index * index)
    const centre = mean(sample)
    const deviation = standardDeviation(sample)
    const points = normalQuantilePlot(sample)
    expect(points).toHaveLength(n)
    points.forEach((point, index) => {
      expect(point.value).toBe(sample[index])
      if (theoretical[index] === 0) expect(point.theoretical).toBe(0)
      else expect(point.theoretical).toBeWithinRelative(theoretical[index]!, 1e-13)
      expect((point.lower - centre) / deviation).toBeWithinRelative(low[index]!, 1e-11)
      expect((point.upper - centre) / deviation).toBeWithinRelative(high[index]!, 1e-11)
    })
  })
})

describe('histogramBins agrees with R\'s rules', () => {
  it.each(descriptive.bins)('$name', ({ name, freedmanDiaconis, sturges, interquartileRange }) => {
    const { values } = descriptive.cases.find(sample => sample.name === name)!
    const { counts } = histogramBins(values)
    expect(counts).toHaveLength(Math.min(MOST_BINS, interquartileRange > 0 ? freedmanDiaconis : sturges))
    expect(counts.reduce((sum, count) => sum + count)).toBe(values.length)
  })
})

describe('adjusted p-values agree with p.adjust', () => {
  it.each(descriptive.adjustments)('$p', ({ p, ...expected }) => {
    bonferroni(p).forEach((value, index) => expect(value).toBeWithinRelative(expected.bonferroni[index]!, 1e-15))
    holm(p).forEach((value, index) => expect(value).toBeWithinRelative(expected.holm[index]!, 1e-15))
  })
})
