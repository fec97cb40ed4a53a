import ln from '@stdlib/math-base-special-ln'
import { normalQuantile } from '../distributions/normal'
import type { Random } from './random'

/** Standard normal variate by inversion, one uniform value each, so that streams stay in step; |z| < 8.3. */
export function standardNormal(random: Random): number {
  return normalQuantile(random.uniform())
}

/** Exponential variate of mean 1 by inversion. */
export function standardExponential(random: Random): number {
  return -ln(random.uniform())
}
