import { powerScale } from './scale'

/**
 * Mean of the values less the first of them. Deviations are formed from this pair, (x − first) − offset, and not
 * from the mean itself, whose last place is coarse where values lie far from 0: at 1e9 it is 1e-7.
 */
export function meanOffset(values: Float64Array, start: number, end: number): number {
  const first = values[start]!
  const n = end - start
  let sum = 0
  for (let i = start; i < end; i++) sum += values[i]! - first
  const offset = sum / n
  let rest = 0
  for (let i = start; i < end; i++) rest += (values[i]! - first) - offset
  return offset + rest / n
}

/** Divisor for the deviations of a sample from its mean, see {@link powerScale}. */
export function deviationScale(values: Float64Array, start: number, end: number, offset: number): number {
  const first = values[start]!
  let reach = 0
  for (let i = start; i < end; i++) {
    const deviation = Math.abs((values[i]! - first) - offset)
    if (deviation > reach) reach = deviation
  }
  return powerScale(reach)
}

/** Sum of the squared deviations from the mean, each divided by the scale. */
export function sumOfSquares(values: Float64Array, start: number, end: number, offset: number, scale: number): number {
  const first = values[start]!
  let sum = 0
  for (let i = start; i < end; i++) {
    const deviation = ((values[i]! - first) - offset) / scale
    sum += deviation * deviation
  }
  return sum
}
