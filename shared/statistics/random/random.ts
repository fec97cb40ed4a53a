import { splitMix64 } from './splitMix64'
import { Xoshiro256 } from './xoshiro256'

/** A source of reproducible random numbers. */
export interface Random {
  /** Next value of the uniform distribution on the open interval (0, 1), a multiple of 2^−53. */
  uniform: () => number
}

const TWO_TO_MINUS_53 = 1 / 9007199254740992
const TWO_TO_21 = 2097152

/**
 * xoshiro256** seeded through SplitMix64, as its authors advise. The same seed gives the same numbers on every
 * machine.
 *
 * @param seed a whole number, 0 ≤ seed < 2^53.
 */
export function createRandom(seed: number): Random {
  if (!Number.isSafeInteger(seed) || seed < 0) throw new RangeError('a seed is a whole number from 0 to 2^53 - 1')
  const generator = new Xoshiro256(splitMix64(BigInt(seed), 4))
  return {
    uniform() {
      // The upper 53 of 64 bits; all of them 0 is drawn again, once in 9e15, so that logarithms exist.
      let bits = 0
      while (bits === 0) {
        generator.next()
        bits = generator.high * TWO_TO_21 + (generator.low >>> 11)
      }
      return bits * TWO_TO_MINUS_53
    },
  }
}
