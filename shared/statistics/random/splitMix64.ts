const GOLDEN_GAMMA = 0x9E3779B97F4A7C15n

/**
 * Numbers of the SplitMix64 generator, 64 bits each: spreads a small seed over the state of a larger generator.
 *
 * Source: Steele, Lea & Flood (2014), OOPSLA, doi:10.1145/2660193.2660195; constants of S. Vigna's splitmix64.c
 * (public domain).
 */
export function splitMix64(seed: bigint, count: number): bigint[] {
  return Array.from({ length: count }, (_, index) => {
    let z = BigInt.asUintN(64, seed + BigInt(index + 1) * GOLDEN_GAMMA)
    z = BigInt.asUintN(64, (z ^ (z >> 30n)) * 0xBF58476D1CE4E5B9n)
    z = BigInt.asUintN(64, (z ^ (z >> 27n)) * 0x94D049BB133111EBn)
    return z ^ (z >> 31n)
  })
}
