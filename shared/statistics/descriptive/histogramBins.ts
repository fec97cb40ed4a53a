import exp from '@stdlib/math-base-special-exp'
import ln from '@stdlib/math-base-special-ln'
import { checkSample } from '../checkSample'
import { InvalidSampleError } from '../invalidSampleError'
import { sortAscending } from '../sortAscending'
import type { Sample } from '../types'
import { hasZeroSpread } from '../zeroSpread'
import { quantileOfOrdered } from './quantile'

/** More bins than this show noise at page width. */
export const MOST_BINS = 60

export interface HistogramBins {
  /** Bounds of the bins, ascending, one more than there are counts; all bins equally wide. */
  readonly edges: readonly number[]
  /** Values in [edge i, edge i+1), the last bin closed on both sides. */
  readonly counts: readonly number[]
}

/** ⌈log2 n⌉ + 1 from the bits of n − 1, where a quotient of logarithms would stumble over powers of two. */
function sturges(n: number): number {
  return 33 - Math.clz32(n - 1)
}

/** Range over the Freedman–Diaconis width 2·IQR·n^(−1/3); Sturges' number where half of the values are equal. */
function numberOfBins(ordered: Float64Array): number {
  const n = ordered.length
  const spread = quantileOfOrdered(ordered, 0, n, 0.75) - quantileOfOrdered(ordered, 0, n, 0.25)
  const range = ordered[n - 1]! - ordered[0]!
  const wanted = spread > 0 ? Math.ceil(range / (2 * spread) * exp(ln(n) / 3)) : sturges(n)
  return Math.max(1, Math.min(MOST_BINS, wanted))
}

function count(ordered: Float64Array, edges: readonly number[]): number[] {
  const counts = edges.slice(1).map(() => 0)
  let bin = 0
  for (const value of ordered) {
    while (bin < counts.length - 1 && value >= edges[bin + 1]!) bin++
    counts[bin]!++
  }
  return counts
}

/** A constant sample has no width of its own: one bin about it, as wide as the value is large, or 1 at zero. */
function singleBin(value: number, n: number): HistogramBins {
  const half = value === 0 ? 0.5 : Math.abs(value) / 2
  return { edges: [value - half, value + half], counts: [n] }
}

/**
 * Bins of equal width from the least to the greatest value: Freedman & Diaconis' rule, Sturges' where the
 * interquartile range (type 7) is 0, at most 60.
 *
 * @param sample n ≥ 1 finite values; not modified.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value` (also where the range overflows).
 *
 * Sources: Freedman & Diaconis (1981), Z. Wahrscheinlichkeitstheorie 57:453–476, doi:10.1007/BF01025868;
 * Sturges (1926), JASA 21:65–66, doi:10.1080/01621459.1926.10502161.
 */
export function histogramBins(sample: Sample): HistogramBins {
  const ordered = checkSample(sample, 1)
  const n = ordered.length
  sortAscending(ordered, 0, n, new Float64Array(n))
  const low = ordered[0]!
  const high = ordered[n - 1]!
  if (high - low === Infinity) throw new InvalidSampleError('non-finite-value')
  if (hasZeroSpread(ordered, 0, n)) return singleBin(low, n)
  const bins = numberOfBins(ordered)
  const edges = Array.from({ length: bins + 1 }, (_, index) => index === bins ? high : low + (high - low) * (index / bins))
  return { edges, counts: count(ordered, edges) }
}
