import { describe, expect, it } from 'vitest'
import { createRandom } from '#shared/statistics/random/random'
import { standardExponential, standardNormal } from '#shared/statistics/random/variates'
import exact from './fixtures/exact.json'

// Expected values: the generator written down a second time in Python's whole numbers, the variates by mpmath
// (scripts/reference/exact.py). What is seeded must not move: demo data and rehearsals rest on it.

describe.each(exact.random)('random numbers of seed $seed', ({ seed, uniform, normal, exponential }) => {
  it('are those of xoshiro256**', () => {
    const random = createRandom(seed)
    expect(uniform.map(() => random.uniform())).toEqual(uniform)
  })

  it('give the variates by inversion', () => {
    const [first, second] = [createRandom(seed), createRandom(seed)]
    for (const z of normal) expect(standardNormal(first)).toBeWithinRelative(z, 1e-14)
    for (const x of exponential) expect(standardExponential(second)).toBeWithinRelative(x, 1e-14)
  })
})
