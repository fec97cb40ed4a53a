import { describe, expect, it } from 'vitest'
import { countNotPositive, shareNotPositive } from '#shared/statistics/descriptive/notPositive'

describe('values that are not positive', () => {
  it('are zero, of either sign, and below', () => {
    expect(countNotPositive([0, -0, -1, 5e-324, 3])).toBe(3)
    expect(shareNotPositive([0, -1, 2, 3])).toBe(0.5)
    expect(shareNotPositive([1e-300])).toBe(0)
  })

  it('are counted within a stretch', () => {
    expect(countNotPositive(Float64Array.of(-1, 1, -1, -1), 1, 3)).toBe(1)
  })

  it('have no share in an empty sample', () => {
    expect(() => shareNotPositive([])).toThrow(expect.objectContaining({ code: 'sample-too-small' }))
  })
})
