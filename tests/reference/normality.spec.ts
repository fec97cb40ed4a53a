import { describe, expect, it } from 'vitest'
import { andersonDarling } from '#shared/statistics/normality/andersonDarling'
import { shapiroWilk } from '#shared/statistics/normality/shapiroWilk'
import exact from './fixtures/exact.json'
import normality from './fixtures/normality.json'
import { lattice } from './lattice'

// Expected values: R's shapiro.test and nortest's ad.test (scripts/reference/normality.R); the sample's origin
// stands beside it in the fixture. exact.json: mpmath, 60 digits (scripts/reference/exact.py).

const latticeCases = normality.lattice.map(({ shape, n, shapiroWilk: sw, andersonDarling: ad }) =>
  ({ name: `${shape} lattice of ${n}`, values: lattice(shape, n), shapiroWilk: sw, andersonDarling: ad }))
const cases = [...normality.samples, ...latticeCases]

describe('shapiroWilk agrees with R', () => {
  it.each(cases)('$name', ({ values, shapiroWilk: expected }) => {
    const result = shapiroWilk(values)
    expect(result.n).toBe(values.length)
    expect(result.statistic).toBeWithinRelative(expected.w, 1e-12)
    expect(result.pValue).toBeWithinRelative(expected.p, 1e-9)
  })

  it('covers both ends of the range and every branch of n', () => {
    expect(new Set(latticeCases.map(({ values }) => values.length))).toEqual(new Set([3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 15, 20, 25, 30, 50, 75, 100, 200, 500, 1000, 2000, 4999, 5000]))
  })

  it('has the digits of mpmath 1e9 away from zero, where R has lost some', () => {
    expect(shapiroWilk(exact.offset.values).statistic).toBeWithinRelative(exact.offset.w, 1e-14)
  })

  it.each(exact.shapiroWilkThree)('is exact for n = 3: $values', ({ values, w, p }) => {
    const result = shapiroWilk(values)
    expect(result.statistic).toBeWithinRelative(w, 1e-14)
    expect(result.pValue).toBeWithinRelative(p, 1e-9)
  })
})

describe('andersonDarling agrees with nortest', () => {
  it.each(cases.filter(({ andersonDarling: expected }) => expected !== null))('$name', ({ values, andersonDarling: expected }) => {
    const result = andersonDarling(values)
    expect(result.statistic).toBeWithinRelative(expected!.a, 1e-11)
    expect(result.pValue).toBeWithinRelative(expected!.p, 1e-10)
  })

  it('reaches every branch of the p-value', () => {
    const adjusted = cases.filter(({ andersonDarling: expected }) => expected !== null).map(({ values }) => andersonDarling(values).adjusted)
    const branches = [0.2, 0.34, 0.6, 10, Infinity].map((bound, index, bounds) => adjusted.filter(a => a < bound && a >= (bounds[index - 1] ?? 0)).length)
    expect(Math.min(...branches)).toBeGreaterThan(0)
  })

  it.each(exact.andersonDarling)('has the digits of mpmath: $shape lattice of $n', ({ shape, n, a }) => {
    expect(andersonDarling(lattice(shape, n)).statistic).toBeWithinRelative(a, 1e-13)
  })

  it('has the digits of mpmath 1e9 away from zero, where R has lost some', () => {
    expect(andersonDarling(exact.offset.values).statistic).toBeWithinRelative(exact.offset.a, 1e-13)
  })
})
