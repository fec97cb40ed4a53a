import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { histogramBins, MOST_BINS } from '#shared/statistics/descriptive/histogramBins'
import { exponentialSample } from '../../../../helpers/randomSamples'

describe('histogramBins', () => {
  it('counts every value once, the greatest in the last bin', () => {
    // IQR 3.5 and n = 8: width 2 * 3.5 / 2 = 3.5, two bins over the range of 7.
    expect(histogramBins([8, 1, 2, 3, 4, 5, 6, 7])).toEqual({ edges: [1, 4.5, 8], counts: [4, 4] })
  })

  it('puts a value on an edge into the bin above', () => {
    // More than half of the values equal: Sturges' number for 8 values is 4.
    expect(histogramBins([0, 4, 4, 4, 4, 4, 4, 8])).toEqual({ edges: [0, 2, 4, 6, 8], counts: [1, 0, 6, 1] })
  })

  it('takes Sturges\' number at and beside a power of two', () => {
    const bins = (n: number) => histogramBins([0, ...new Array<number>(n - 2).fill(0.4), 1]).counts.length
    expect([8, 9, 16, 17, 64, 65].map(bins)).toEqual([4, 5, 5, 6, 7, 8])
  })

  it('shows at most 60 bins', () => {
    const sample = [...exponentialSample(500, 2), 1e6]
    expect(histogramBins(sample).counts).toHaveLength(MOST_BINS)
  })

  it.each([
    [[5, 5, 5], [2.5, 7.5]],
    [[-2], [-3, -1]],
    [[0, 0], [-0.5, 0.5]],
  ])('gives constant values %j one bin', (sample, edges) => {
    expect(histogramBins(sample)).toEqual({ edges, counts: [sample.length] })
  })

  it('has ascending edges about all values, whatever they are', () => {
    fc.assert(fc.property(fc.array(fc.double({ noNaN: true, min: -1e300, max: 1e300 }), { minLength: 1, maxLength: 80 }), (sample) => {
      const { edges, counts } = histogramBins(sample)
      expect(counts.reduce((sum, count) => sum + count)).toBe(sample.length)
      expect(counts.every(count => Number.isInteger(count) && count >= 0)).toBe(true)
      expect(edges.every((edge, index) => Number.isFinite(edge) && (index === 0 || edge >= edges[index - 1]!))).toBe(true)
      expect(edges[0]).toBeLessThanOrEqual(Math.min(...sample))
      expect(edges[edges.length - 1]).toBeGreaterThanOrEqual(Math.max(...sample))
    }))
  })

  it.each([
    ['sample-too-small', []],
    ['non-finite-value', [1, Number.NaN]],
    ['non-finite-value', [-1.7e308, 1.7e308]],
  ])('refuses %s', (code, sample) => {
    expect(() => histogramBins(sample)).toThrow(expect.objectContaining({ code }))
  })
})
