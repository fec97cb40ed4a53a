import { describe, expect, it } from 'vitest'
import { MOST_POINTS, normalQuantilePlot } from '#shared/statistics/descriptive/normalQuantilePlot'
import { normalQuantile } from '#shared/statistics/distributions/normal'
import { normalSample } from '../../../../helpers/randomSamples'

describe('normalQuantilePlot', () => {
  it('shows every value of a small sample at Blom\'s positions', () => {
    const points = normalQuantilePlot([7, 1, 4])
    expect(points.map(({ value }) => value)).toEqual([1, 4, 7])
    expect(points[2]!.theoretical).toBeWithinRelative(normalQuantile(2.625 / 3.25), 1e-15)
    expect(points[1]!.theoretical).toBe(0)
  })

  it('is symmetric about the mean', () => {
    const points = normalQuantilePlot([-3, -1, 1, 3])
    points.forEach((point, index) => {
      const mirrored = points[3 - index]!
      expect(point.theoretical).toBeCloseTo(-mirrored.theoretical, 14)
      expect(point.lower).toBeCloseTo(-mirrored.upper, 12)
    })
  })

  it('has a band of 95 % for each order statistic of normal samples', () => {
    const n = 15
    const repeats = 2000
    const band = normalQuantilePlot(normalSample(n, 1))
    const centre = (band[7]!.lower + band[7]!.upper) / 2
    const sd = (band[0]!.lower - centre) / normalQuantile(1 - 0.975 ** (1 / n))
    const inside = new Array<number>(n).fill(0)
    for (let seed = 0; seed < repeats; seed++) {
      normalSample(n, 1000 + seed).sort((a, b) => a - b).forEach((z, index) => {
        const { lower, upper } = band[index]!
        if (centre + sd * z >= lower && centre + sd * z <= upper) inside[index]!++
      })
    }
    for (const count of inside) expect(Math.abs(count / repeats - 0.95)).toBeLessThan(0.02)
  })

  it.each([401, 1000, 5000, 100001])('reduces %d values to 400 points with both tails whole', (n) => {
    const points = normalQuantilePlot(Array.from({ length: n }, (_, index) => index + 1))
    const ranks = points.map(({ value }) => value)
    expect(ranks).toHaveLength(MOST_POINTS)
    expect(ranks.slice(0, 100)).toEqual(Array.from({ length: 100 }, (_, index) => index + 1))
    expect(ranks.slice(-100)).toEqual(Array.from({ length: 100 }, (_, index) => n - 99 + index))
    expect(ranks.every((rank, index) => index === 0 || rank > ranks[index - 1]!)).toBe(true)
    const steps = ranks.slice(100, 300).map((rank, index) => rank - ranks[99 + index]!)
    expect(Math.max(...steps) - Math.min(...steps)).toBeLessThanOrEqual(1)
  })

  it('shows a constant sample as a level line', () => {
    const points = normalQuantilePlot([4, 4, 4])
    expect(points.every(({ value, lower, upper }) => value === 4 && lower === 4 && upper === 4)).toBe(true)
  })

  it.each([
    ['sample-too-small', [1]],
    ['non-finite-value', [1, Infinity]],
    ['non-finite-value', [-1e308, 1e308]],
  ])('refuses %s', (code, sample) => {
    expect(() => normalQuantilePlot(sample)).toThrow(expect.objectContaining({ code }))
  })
})
