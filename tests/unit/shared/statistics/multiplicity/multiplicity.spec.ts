import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { bonferroni, bonferroniLevel } from '#shared/statistics/multiplicity/bonferroni'
import { holm } from '#shared/statistics/multiplicity/holm'

const pValues = fc.array(fc.oneof(fc.double({ min: 0, max: 1, noNaN: true }), fc.constantFrom(0, 0.01, 0.05, 1)), { maxLength: 12 })

describe('bonferroni', () => {
  it('multiplies by the number of tests, at most to 1', () => {
    expect(bonferroni([0.25, 0.5, 0.0625])).toEqual([0.75, 1, 0.1875])
    expect(bonferroni([])).toEqual([])
  })
})

describe('holm', () => {
  it('reproduces a worked case in the order given', () => {
    // Ascending 0.005, 0.01, 0.03, 0.04: times 4, 3, 2, 1, then never falling.
    const adjusted = holm([0.01, 0.04, 0.03, 0.005])
    for (const [index, expected] of [0.03, 0.06, 0.06, 0.02].entries()) expect(adjusted[index]).toBeWithinRelative(expected, 1e-15)
  })

  it('follows the step-down definition', () => {
    fc.assert(fc.property(pValues, (p) => {
      const order = p.map((_, index) => index).sort((a, b) => p[a]! - p[b]!)
      const adjusted = holm(p)
      let running = 0
      order.forEach((at, place) => {
        running = Math.max(running, Math.min(1, (p.length - place) * p[at]!))
        expect(adjusted[at]).toBe(running)
      })
    }))
  })

  it('lies between the p-value and Bonferroni\'s, and gives equal values for equal ones', () => {
    fc.assert(fc.property(pValues, (p) => {
      const [ours, theirs] = [holm(p), bonferroni(p)]
      ours.forEach((value, index) => {
        expect(value).toBeGreaterThanOrEqual(p[index]!)
        expect(value).toBeLessThanOrEqual(theirs[index]!)
        expect(ours[p.indexOf(p[index]!)]).toBe(value)
      })
    }))
  })

  it('rejects anything exactly when Bonferroni does, at the level of its first step', () => {
    fc.assert(fc.property(pValues.filter(p => p.length > 0), (p) => {
      // Away from the level itself, where a product and a quotient may round to different sides.
      const least = Math.min(...p)
      fc.pre(Math.abs(least * p.length - 0.05) > 1e-12)
      const any = (adjusted: readonly number[]) => adjusted.some(value => value <= 0.05)
      expect(any(holm(p))).toBe(any(bonferroni(p)))
      expect(any(holm(p))).toBe(least <= bonferroniLevel(0.05, p.length))
    }))
  })

  it('passes NaN on and leaves the others alone', () => {
    expect(holm([Number.NaN])).toEqual([Number.NaN])
  })
})
