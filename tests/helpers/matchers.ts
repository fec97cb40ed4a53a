import { expect } from 'vitest'

interface NumericMatchers<R> {
  /**
   * Holds when |received − expected| ≤ tolerance · |expected|. Unlike `toBeCloseTo` it also sees a wrong tail:
   * 0 is not within any relative tolerance of 1e-9.
   */
  toBeWithinRelative: (expected: number, tolerance: number) => R
}

declare module 'vitest' {
  // eslint-disable-next-line @typescript-eslint/no-empty-object-type -- merging an interface is how vitest takes a matcher
  interface Matchers<T> extends NumericMatchers<T> {}
}

/** Size of the difference against the expected value; 0 when both are the same number, infinities included. */
function relativeError(received: number, expected: number): number {
  return Object.is(received, expected) || received === expected ? 0 : Math.abs(received - expected) / Math.abs(expected)
}

expect.extend({
  toBeWithinRelative(received: unknown, expected: number, tolerance: number) {
    const error = typeof received === 'number' ? relativeError(received, expected) : Number.NaN
    return {
      pass: error <= tolerance,
      message: () => `${String(received)} is ${this.isNot ? '' : 'not '}within ${tolerance} of ${expected}: relative error ${error}`,
    }
  },
})
