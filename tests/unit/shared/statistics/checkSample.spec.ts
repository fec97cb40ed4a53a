import { describe, expect, it } from 'vitest'
import { checkGroups } from '#shared/statistics/checkGroups'
import { checkSample } from '#shared/statistics/checkSample'
import { InvalidSampleError } from '#shared/statistics/invalidSampleError'

describe('checkSample', () => {
  it('copies the values and leaves the sample alone', () => {
    const sample = [3, 1, 2]
    const values = checkSample(sample, 1)
    values[0] = 9
    expect(sample).toEqual([3, 1, 2])
    expect([...checkSample(Float64Array.of(4, 5), 2)]).toEqual([4, 5])
  })

  it.each([
    ['sample-too-small', [1], 2, 10],
    ['sample-too-large', [1, 2, 3], 1, 2],
    ['non-finite-value', [1, Number.NaN], 1, 10],
    ['non-finite-value', [1, -Infinity], 1, 10],
  ])('refuses %s', (code, sample, least, most) => {
    const attempt = () => checkSample(sample, least, most)
    expect(attempt).toThrow(InvalidSampleError)
    expect(attempt).toThrow(expect.objectContaining({ code, name: 'InvalidSampleError', message: code }))
  })
})

describe('checkGroups', () => {
  it('packs groups one after the other', () => {
    const { values, offsets } = checkGroups([[1, 2], [3], [4, 5, 6]], { groups: 2, size: 1 })
    expect([...values]).toEqual([1, 2, 3, 4, 5, 6])
    expect([...offsets]).toEqual([0, 2, 3, 6])
  })

  it.each([
    ['too-few-groups', [[1, 2]]],
    ['sample-too-small', [[1, 2], []]],
    ['non-finite-value', [[1, 2], [3, Infinity]]],
  ])('refuses %s', (code, groups) => {
    expect(() => checkGroups(groups, { groups: 2, size: 1 })).toThrow(expect.objectContaining({ code }))
  })
})
