import { describe, expect, it } from 'vitest'
import { brownForsythe } from '#shared/statistics/spread/brownForsythe'
import { sdRatio } from '#shared/statistics/spread/sdRatio'
import exact from './fixtures/exact.json'
import spread from './fixtures/spread.json'

// Expected values: car::leveneTest(center = median), sd and var.test (scripts/reference/spread.R).

describe('brownForsythe agrees with car', () => {
  it.each(spread.cases)('$name', ({ groups, brownForsythe: expected }) => {
    const result = brownForsythe(groups)
    expect(result).toMatchObject({ df1: expected.df1, df2: expected.df2, n: groups.flat().length })
    expect(result.statistic).toBeWithinRelative(expected.f, 1e-10)
    expect(result.pValue).toBeWithinRelative(expected.p, 1e-10)
  })

  it('has the digits of exact arithmetic 1e9 away from zero, where R has lost its own', () => {
    const result = brownForsythe(exact.offsetGroups.groups)
    expect(result.statistic).toBeWithinRelative(exact.offsetGroups.f, 1e-13)
    expect(result.pValue).toBeWithinRelative(exact.offsetGroups.p, 1e-12)
  })

  it('is the exact fraction 42544/5609 for the three groups of ten', () => {
    // For df1 = 2, P(F >= f) = (1 + 2f/df2)^(-df2/2); both by rational arithmetic on the decimals.
    const { groups } = spread.cases.find(({ name }) => name === 'three-of-ten')!
    const result = brownForsythe(groups)
    expect(result.statistic).toBeWithinRelative(42544 / 5609, 1e-12)
    expect(result.pValue).toBeWithinRelative((1 + 2 * (42544 / 5609) / 27) ** -13.5, 1e-11)
  })
})

describe('sdRatio agrees with R', () => {
  it.each(spread.cases)('$name', ({ groups, sdRatio: expected }) => {
    const result = sdRatio(groups)
    expect(result.value).toBeWithinRelative(expected.ratio, 1e-12)
    if (expected.low === undefined || expected.high === undefined) {
      expect(result).toMatchObject({ lower: null, upper: null })
      return
    }
    // R's qf is good to 1e-10 only; its limits are for the group with the larger estimate over the other.
    expect(result.lower).toBeWithinRelative(Math.max(1, expected.low), 1e-9)
    expect(result.upper).toBeWithinRelative(Math.max(expected.high, 1 / expected.low), 1e-9)
  })
})
