import { describe, expect, it } from 'vitest'
import { mean } from '#shared/statistics/descriptive/mean'
import { standardDeviation } from '#shared/statistics/descriptive/standardDeviation'
import { createRandom } from '#shared/statistics/random/random'
import { splitMix64 } from '#shared/statistics/random/splitMix64'
import { standardExponential, standardNormal } from '#shared/statistics/random/variates'
import { Xoshiro256 } from '#shared/statistics/random/xoshiro256'

function draw(generator: Xoshiro256): bigint {
  generator.next()
  return (BigInt(generator.high) << 32n) | BigInt(generator.low)
}

describe('Xoshiro256', () => {
  it('reproduces the reference implementation from the state 1, 2, 3, 4', () => {
    // Output of Vigna's xoshiro256starstar.c, as quoted by the tests of rand_xoshiro (rust-random/rngs).
    const generator = new Xoshiro256([1n, 2n, 3n, 4n])
    expect(Array.from({ length: 10 }, () => draw(generator))).toEqual([
      11520n, 0n, 1509978240n, 1215971899390074240n, 1216172134540287360n, 607988272756665600n,
      16172922978634559625n, 8476171486693032832n, 10595114339597558777n, 2904607092377533576n,
    ])
  })

  it('agrees with its definition in whole numbers of 64 bits over a long stretch', () => {
    const mask = (1n << 64n) - 1n
    const rotate = (x: bigint, k: bigint) => ((x << k) | (x >> (64n - k))) & mask
    const s = splitMix64(42n, 4)
    const generator = new Xoshiro256(s)
    for (let i = 0; i < 5000; i++) {
      expect(draw(generator)).toBe((rotate((s[1]! * 5n) & mask, 7n) * 9n) & mask)
      const t = (s[1]! << 17n) & mask
      s[2]! ^= s[0]!
      s[3]! ^= s[1]!
      s[1]! ^= s[2]!
      s[0]! ^= s[3]!
      s[2]! ^= t
      s[3] = rotate(s[3]!, 45n)
    }
  })

  it('refuses a state that it could never leave', () => {
    expect(() => new Xoshiro256([0n, 0n, 0n, 0n])).toThrow(RangeError)
    expect(() => new Xoshiro256([1n])).toThrow(RangeError)
  })
})

describe('splitMix64', () => {
  it('reproduces the reference output for the seed 1234567', () => {
    // Rosetta Code, Pseudo-random numbers/Splitmix64.
    expect(splitMix64(1234567n, 5)).toEqual([
      6457827717110365317n, 3203168211198807973n, 9817491932198370423n, 4593380528125082431n, 16408922859458223821n,
    ])
  })
})

describe('createRandom', () => {
  it('draws the same numbers for the same seed and others for another', () => {
    const numbers = (seed: number) => {
      const random = createRandom(seed)
      return Array.from({ length: 50 }, () => random.uniform())
    }
    expect(numbers(7)).toEqual(numbers(7))
    expect(numbers(7)).not.toEqual(numbers(8))
  })

  it('draws the upper 53 bits of the generator', () => {
    const generator = new Xoshiro256(splitMix64(99n, 4))
    const random = createRandom(99)
    for (let i = 0; i < 100; i++) expect(random.uniform()).toBe(Number(draw(generator) >> 11n) / 2 ** 53)
  })

  it('fills the open unit interval evenly', () => {
    const random = createRandom(2026)
    const counts = new Array<number>(20).fill(0)
    for (let i = 0; i < 40000; i++) {
      const u = random.uniform()
      expect(u > 0 && u < 1).toBe(true)
      counts[Math.floor(20 * u)]!++
    }
    // Chi-square on 19 degrees of freedom; 43.8 is its upper 0.1 % point.
    expect(counts.reduce((sum, count) => sum + (count - 2000) ** 2 / 2000, 0)).toBeLessThan(43.8)
  })

  it.each([-1, 0.5, Number.NaN, 2 ** 53, Infinity])('refuses the seed %d', (seed) => {
    expect(() => createRandom(seed)).toThrow(RangeError)
  })
})

describe('variates', () => {
  it('have the moments of their distributions', () => {
    const random = createRandom(11)
    const normal = Array.from({ length: 20000 }, () => standardNormal(random))
    const exponential = Array.from({ length: 20000 }, () => standardExponential(random))
    expect(Math.abs(mean(normal))).toBeLessThan(0.03)
    expect(standardDeviation(normal)).toBeWithinRelative(1, 0.02)
    expect(mean(exponential)).toBeWithinRelative(1, 0.03)
    expect(standardDeviation(exponential)).toBeWithinRelative(1, 0.05)
    expect(Math.min(...exponential)).toBeGreaterThan(0)
  })
})
