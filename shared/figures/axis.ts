import { scaleLinear } from 'd3-scale'
import type { Axis } from './figure'

/** Widens an interval without length, so that one distinct value still has a place. */
function interval(least: number, greatest: number): [number, number] {
  if (least < greatest) return [least, greatest]
  const margin = Math.abs(least) > 0 ? Math.abs(least) * 0.1 : 1
  return [least - margin, greatest + margin]
}

/**
 * A linear axis with few, round ticks.
 *
 * @param title quantity and unit, already worded.
 * @param least, greatest the data to be covered; `nice` rounds them outwards to ticks.
 */
export function linearAxis(title: string, least: number, greatest: number, { ticks = 5, nice = true } = {}): Axis {
  const scale = scaleLinear().domain(interval(least, greatest))
  if (nice) scale.nice(ticks)
  const [from = 0, to = 1] = scale.domain()
  const format = scale.tickFormat(ticks)
  return { title, domain: [from, to], ticks: scale.ticks(ticks).map(value => ({ value, label: format(value) })) }
}
