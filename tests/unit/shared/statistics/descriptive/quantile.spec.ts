import { describe, expect, it } from 'vitest'
import { median } from '#shared/statistics/descriptive/median'
import { quantile } from '#shared/statistics/descriptive/quantile'

describe('median', () => {
  it('is the middle value, or the middle of both', () => {
    expect(median([5, 1, 9])).toBe(5)
    expect(median([5, 1, 9, 6])).toBe(5.5)
    expect(median([7])).toBe(7)
  })

  it('does not overflow and does not touch the sample', () => {
    const sample = [1.7e308, 1.6e308]
    expect(median(sample)).toBeWithinRelative(1.65e308, 1e-15)
    expect(sample).toEqual([1.7e308, 1.6e308])
  })

  it('refuses an empty sample', () => {
    expect(() => median([])).toThrow(expect.objectContaining({ code: 'sample-too-small' }))
  })
})

describe('quantile (type 7)', () => {
  it('interpolates at 1 + (n - 1) p', () => {
    expect(quantile([40, 10, 30, 20], 0.5)).toBe(25)
    expect(quantile([40, 10, 30, 20], 1 / 3)).toBe(20)
    expect(quantile([40, 10, 30, 20], 0.25)).toBe(17.5)
  })

  it('has the least and the greatest value at its ends', () => {
    expect(quantile([3, 8, 5], 0)).toBe(3)
    expect(quantile([3, 8, 5], 1)).toBe(8)
    expect(quantile([4], 0.3)).toBe(4)
  })

  it('is NaN outside [0, 1]', () => {
    expect(quantile([1, 2], -0.1)).toBeNaN()
    expect(quantile([1, 2], 1.1)).toBeNaN()
    expect(quantile([1, 2], Number.NaN)).toBeNaN()
  })

  it('refuses an empty sample', () => {
    expect(() => quantile([], 0.5)).toThrow(expect.objectContaining({ code: 'sample-too-small' }))
  })
})
