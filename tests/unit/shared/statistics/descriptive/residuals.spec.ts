import { describe, expect, it } from 'vitest'
import { residualsByOwnSdKernel, residualsKernel, valuesAboutMediansKernel } from '#shared/statistics/descriptive/residuals'
import { standardDeviation } from '#shared/statistics/descriptive/standardDeviation'
import { createWorkspace } from '#shared/statistics/workspace'

const offsets = Uint32Array.of(0, 3, 3, 7)
const values = Float64Array.of(1, 2, 6, 10, 20, 30, 40)

describe('residuals', () => {
  it('are centred within their own group; an empty group has none', () => {
    const into = new Float64Array(7)
    residualsKernel(values, offsets, into)
    expect([...into]).toEqual([-2, -1, 3, -15, -5, 5, 15])
  })

  it('may be written over the values', () => {
    const own = values.slice()
    residualsKernel(own, offsets, own)
    expect([...own]).toEqual([-2, -1, 3, -15, -5, 5, 15])
  })

  it('are exactly 0 in a constant group', () => {
    const into = new Float64Array(12)
    residualsKernel(new Float64Array(12).fill(3.7), Uint32Array.of(0, 12), into)
    expect(into.every(residual => residual === 0)).toBe(true)
  })
})

describe('residuals by own SD', () => {
  it('have SD 1 in every group, also when written over the values', () => {
    const own = values.slice()
    expect(residualsByOwnSdKernel(own, offsets, own)).toBeNull()
    expect(standardDeviation(own.subarray(0, 3))).toBeWithinRelative(1, 1e-14)
    expect(standardDeviation(own.subarray(3, 7))).toBeWithinRelative(1, 1e-14)
    expect(own[0]).toBeWithinRelative(-2 / Math.sqrt(7), 1e-14)
  })

  it.each([
    ['sample-too-small', [1, 2, 3, 9], [0, 3, 4]],
    ['zero-spread', [1, 2, 3, 9, 9], [0, 3, 5]],
    ['non-finite-value', [1, 2, 3, -1e308, 1e308], [0, 3, 5]],
  ])('refuse %s', (problem, sample, bounds) => {
    expect(residualsByOwnSdKernel(Float64Array.from(sample), Uint32Array.from(bounds), new Float64Array(5))).toBe(problem)
  })
})

describe('values about medians', () => {
  it('are less the median of their own group', () => {
    const into = new Float64Array(7)
    valuesAboutMediansKernel(values, offsets, into, createWorkspace(7))
    expect([...into]).toEqual([-1, 0, 4, -15, -5, 5, 15])
  })
})
