/** 64-bit words are kept as two 32-bit halves, high before low, because shifts in the language are 32 bits wide. */
const WORDS = 4

/**
 * The xoshiro256** 1.0 generator: period 2^256 − 1, whole-number arithmetic only, so that every machine draws the
 * same numbers. Not for secrets.
 *
 * Source: Blackman & Vigna (2021), ACM TOMS 47(4):36, doi:10.1145/3460772.
 */
export class Xoshiro256 {
  /** Halves of the number drawn last, unsigned. */
  high = 0
  low = 0
  private readonly state = new Uint32Array(2 * WORDS)

  /** @param words four 64-bit words, not all 0. */
  constructor(words: readonly bigint[]) {
    if (words.length !== WORDS || words.every(word => word === 0n)) throw new RangeError('xoshiro256** needs four words, not all 0')
    words.forEach((word, index) => {
      this.state[2 * index] = Number(BigInt.asUintN(32, word >> 32n))
      this.state[2 * index + 1] = Number(BigInt.asUintN(32, word))
    })
  }

  /** Draws the next 64 bits into `high` and `low`. */
  next(): void {
    this.scramble(this.state[2]!, this.state[3]!)
    this.advance()
  }

  /** rotl(word · 5, 7) · 9. */
  private scramble(high: number, low: number): void {
    this.multiply(high, low, 2)
    const rotatedHigh = (this.high << 7) | (this.low >>> 25)
    const rotatedLow = (this.low << 7) | (this.high >>> 25)
    this.multiply(rotatedHigh, rotatedLow, 3)
  }

  /** word · (2^shift + 1) = (word << shift) + word, with the carry between the halves. */
  private multiply(high: number, low: number, shift: number): void {
    const sum = ((low << shift) >>> 0) + (low >>> 0)
    const carry = sum > 0xFFFFFFFF ? 1 : 0
    this.low = sum >>> 0
    this.high = (((high << shift) | (low >>> (32 - shift))) + high + carry) >>> 0
  }

  /** The linear engine; each pair of lines is one operation on a 64-bit word. */
  private advance(): void {
    const s = this.state
    const shiftedHigh = (s[2]! << 17) | (s[3]! >>> 15)
    const shiftedLow = s[3]! << 17
    s[4]! ^= s[0]!
    s[5]! ^= s[1]!
    s[6]! ^= s[2]!
    s[7]! ^= s[3]!
    s[2]! ^= s[4]!
    s[3]! ^= s[5]!
    s[0]! ^= s[6]!
    s[1]! ^= s[7]!
    s[4]! ^= shiftedHigh
    s[5]! ^= shiftedLow
    // rotl(word, 45): the halves change places and are turned by 13.
    const high = s[6]!
    const low = s[7]!
    s[6] = (low << 13) | (high >>> 19)
    s[7] = (high << 13) | (low >>> 19)
  }
}
