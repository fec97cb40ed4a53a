import { describe, expect, it } from 'vitest'
import { mean } from '#shared/statistics/descriptive/mean'
import { standardDeviation } from '#shared/statistics/descriptive/standardDeviation'
import { fUpperPoint } from '#shared/statistics/distributions/f'
import { tQuantile } from '#shared/statistics/distributions/t'
import { andersonDarling } from '#shared/statistics/normality/andersonDarling'
import { shapiroWilk } from '#shared/statistics/normality/shapiroWilk'
import { brownForsythe } from '#shared/statistics/spread/brownForsythe'
import samples from '../../scripts/reference/samples.json'

// Values as printed in the literature and by other programs; the tolerance is half a unit of the last printed
// digit unless it is stated otherwise. The source of each sample stands in scripts/reference/samples.json.

const values = (name: string) => samples.samples.find(sample => sample.name === name)!.values
const groups = (name: string) => samples.groups.find(sample => sample.name === name)!.values

describe('published Shapiro-Wilk examples', () => {
  it('Royston (1995), AS R94: W = 0.83467, p = 0.000914', () => {
    const result = shapiroWilk(values('royston-1995'))
    expect(Math.abs(result.statistic - 0.83467)).toBeLessThan(5e-6)
    expect(Math.abs(result.pValue - 0.000914)).toBeLessThan(1e-6)
  })

  it('Shapiro & Wilk (1965), eleven weights: W = 0.79', () => {
    expect(Math.abs(shapiroWilk(values('weights-1965')).statistic - 0.79)).toBeLessThan(5e-3)
  })

  it.each([
    ['twenty-skewed', 0.900473, 0.042090],
    ['twenty-normal', 0.959027, 0.524598],
  ])('SciPy 1.10.1 test suite, %s, in single precision', (name, w, p) => {
    const result = shapiroWilk(values(name))
    expect(Math.abs(result.statistic - w)).toBeLessThan(1e-6)
    expect(Math.abs(result.pValue - p)).toBeLessThan(1e-5)
  })
})

describe('published Anderson-Darling example', () => {
  it('SciPy 1.10.1 test suite, quoting nortest: A = 3.208057', () => {
    expect(Math.abs(andersonDarling(values('nine-ones-and-a-zero')).statistic - 3.208057)).toBeLessThan(5e-7)
  })
})

describe('published Brown-Forsythe examples', () => {
  it('NIST e-Handbook 1.3.5.10, GEAR.DAT: 1.705910 printed, 1.7059177 computed by others', () => {
    // The handbook rounds on the way; HypothesisTests.jl and SciPy check against it with 1e-5.
    expect(Math.abs(brownForsythe(groups('gear')).statistic - 1.705910)).toBeLessThan(1e-5)
  })

  it('SciPy 1.10.1 test suite, GEAR.DAT: W = 1.7059176930008939, p = 0.0990829755522', () => {
    const result = brownForsythe(groups('gear'))
    expect(result.statistic).toBeWithinRelative(1.7059176930008939, 1e-12)
    expect(result.pValue).toBeWithinRelative(0.0990829755522, 1e-11)
  })
})

describe('published critical values', () => {
  it('NIST e-Handbook 1.3.5.10: upper 5 % point of F(9, 90) is 1.9855', () => {
    expect(Math.abs(fUpperPoint(0.05, 9, 90) - 1.9855)).toBeLessThan(1e-4)
  })

  it('NIST e-Handbook 1.3.5.3: 97.5 % point of t(326) is 1.9673', () => {
    expect(Math.abs(tQuantile(0.975, 326) - 1.9673)).toBeLessThan(5e-5)
  })
})

describe('NIST StRD univariate summary statistics, certified values', () => {
  const alternating = (base: number) => [base + 0.2, ...Array.from({ length: 1000 }, (_, index) => base + (index % 2 === 0 ? 0.1 : 0.3))]

  it('NumAcc1: mean 10000002, standard deviation 1', () => {
    expect(mean([10000001, 10000003, 10000002])).toBe(10000002)
    expect(standardDeviation([10000001, 10000003, 10000002])).toBe(1)
  })

  // The certified value holds for the decimals; beyond the stated tolerance it is their doubles that differ.
  it.each([
    ['NumAcc2', 1, 1e-14],
    ['NumAcc3', 1000000, 1e-9],
    ['NumAcc4', 10000000, 1e-8],
  ])('%s: mean %d.2, standard deviation 0.1', (_, base, tolerance) => {
    expect(mean(alternating(base))).toBeWithinRelative(base + 0.2, 1e-15)
    expect(standardDeviation(alternating(base))).toBeWithinRelative(0.1, tolerance)
  })
})
