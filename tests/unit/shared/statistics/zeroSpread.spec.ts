import { describe, expect, it } from 'vitest'
import { hasZeroSpread } from '#shared/statistics/zeroSpread'

const zeroSpread = (sample: number[]) => hasZeroSpread(Float64Array.from(sample), 0, sample.length)

describe('hasZeroSpread', () => {
  it.each([
    [[5, 5, 5]],
    [[0, 0, 0, 0]],
    [[0.1 + 0.2, 0.3, 0.3]],
    [[-3.7, -3.7, -3.7]],
  ])('sees that %j is constant up to rounding', (sample) => {
    expect(zeroSpread(sample)).toBe(true)
  })

  it.each([
    [[5, 5, 5.0001]],
    [[0, 0, 5e-324]],
    [[1e9, 1e9 + 1e-3]],
    [[1, 1 + 1e-14]],
  ])('sees that %j is not', (sample) => {
    expect(zeroSpread(sample)).toBe(false)
  })

  it('looks at the stretch that it is given', () => {
    expect(hasZeroSpread(Float64Array.of(1, 2, 2, 3), 1, 3)).toBe(true)
  })
})
