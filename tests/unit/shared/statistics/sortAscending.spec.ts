import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { sortAscending } from '#shared/statistics/sortAscending'

describe('sortAscending', () => {
  it('orders what the built-in sort orders, for every length about the runs that it merges', () => {
    for (let n = 0; n <= 200; n++) {
      const values = Float64Array.from({ length: n }, (_, index) => (index * 7919) % 101)
      const expected = values.slice().sort()
      sortAscending(values, 0, n, new Float64Array(n))
      expect(values).toEqual(expected)
    }
  })

  it('orders any values, ties among them', () => {
    fc.assert(fc.property(fc.array(fc.oneof(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.integer({ min: -3, max: 3 })), { maxLength: 400 }), (sample) => {
      const values = Float64Array.from(sample, value => value + 0)
      const expected = values.slice().sort()
      sortAscending(values, 0, values.length, new Float64Array(values.length))
      for (let i = 0; i < values.length; i++) expect(values[i] === expected[i]).toBe(true)
    }))
  })

  it('needs room for half of the stretch only and leaves the rest alone', () => {
    const n = 1000
    const values = Float64Array.from({ length: n + 20 }, (_, index) => -index)
    sortAscending(values, 10, n + 10, new Float64Array(768))
    expect([...values.subarray(0, 10)]).toEqual(Array.from({ length: 10 }, (_, index) => -index))
    expect(values[n + 10]).toBe(-(n + 10))
    expect(values.subarray(10, n + 10).every((value, index, stretch) => index === 0 || stretch[index - 1]! < value)).toBe(true)
  })
})
