import { checkSample } from '../checkSample'
import { betaQuantile } from '../distributions/beta'
import { normalQuantile } from '../distributions/normal'
import { InvalidSampleError } from '../invalidSampleError'
import { sortAscending } from '../sortAscending'
import type { Sample } from '../types'
import { meanKernel } from './mean'
import { standardDeviationKernel } from './standardDeviation'

/** More points than this cannot be told apart at page width. */
export const MOST_POINTS = 400
/** Of a larger sample, so many of the least and of the greatest values are all kept. */
const KEPT_TAIL = 100
/** Lower tail of the pointwise band. */
const TAIL = 0.025

export interface QuantilePoint {
  /** Quantile of the standard normal distribution at Blom's position. */
  readonly theoretical: number
  /** Order statistic, in the unit of the sample. */
  readonly value: number
  /** Pointwise 95 % band for this order statistic, in the same unit. */
  readonly lower: number
  readonly upper: number
}

/** Ranks to be shown, ascending from 1: all of them, or both tails whole and the middle evenly thinned. */
function shownRanks(n: number): number[] {
  if (n <= MOST_POINTS) return Array.from({ length: n }, (_, index) => index + 1)
  const middle = MOST_POINTS - 2 * KEPT_TAIL
  const step = (n - 2 * KEPT_TAIL + 1) / (middle + 1)
  return Array.from({ length: MOST_POINTS }, (_, index) => {
    if (index < KEPT_TAIL) return index + 1
    if (index >= MOST_POINTS - KEPT_TAIL) return n - (MOST_POINTS - 1 - index)
    return Math.round(KEPT_TAIL + (index - KEPT_TAIL + 1) * step)
  })
}

/**
 * Coordinates of a normal quantile plot: order statistics against normal quantiles at Blom's positions
 * (i − 3/8)/(n + 1/4), reduced to at most 400 points.
 *
 * The band is that of the order statistics of a normal sample: the i-th of n uniform values has the
 * distribution Beta(i, n − i + 1), whose 2.5 % and 97.5 % points are carried through the normal quantile and
 * the sample's own mean and standard deviation. It holds point by point, not for the plot as a whole, and takes
 * mean and standard deviation as known, which makes it somewhat wide.
 *
 * @param sample n ≥ 2 finite values; not modified.
 * @throws {InvalidSampleError} `sample-too-small`, `non-finite-value` (also where the spread overflows).
 *
 * Sources: Blom (1958), Statistical Estimates and Transformed Beta-Variables; David & Nagaraja
 * (2003), Order Statistics, 3rd edition, section 2.1, for the distribution.
 */
export function normalQuantilePlot(sample: Sample): QuantilePoint[] {
  const ordered = checkSample(sample, 2)
  const n = ordered.length
  sortAscending(ordered, 0, n, new Float64Array(n))
  const mean = meanKernel(ordered, 0, n)
  const deviation = standardDeviationKernel(ordered, 0, n)
  if (!Number.isFinite(deviation)) throw new InvalidSampleError('non-finite-value')
  const band = (rank: number) => deviation * normalQuantile(betaQuantile(TAIL, rank, n - rank + 1))
  return shownRanks(n).map(rank => ({
    theoretical: normalQuantile((rank - 0.375) / (n + 0.25)),
    value: ordered[rank - 1]!,
    lower: mean + band(rank),
    upper: mean - band(n - rank + 1),
  }))
}
