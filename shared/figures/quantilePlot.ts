import type { PlotData } from '../decision/report'
import { linearAxis } from './axis'
import type { Dot, Figure } from './figure'

export interface QuantileWords {
  readonly title: string
  /** Name of the judged quantity with its unit. */
  readonly quantity: string
  readonly normalQuantile: string
  readonly band: string
}

const least = (values: readonly number[]) => values.reduce((low, value) => Math.min(low, value), Infinity)
const greatest = (values: readonly number[]) => values.reduce((high, value) => Math.max(high, value), -Infinity)

/** The line of the fitted normal through the ends of the horizontal axis; none without a spread. */
function referenceLine(fitted: PlotData['fitted'], [from, to]: readonly [number, number]): Dot[] {
  if (fitted === null || fitted.sd <= 0) return []
  return [from, to].map(x => ({ x, y: fitted.mean + fitted.sd * x }))
}

/**
 * Ordered values against the quantiles of a standard normal, with the line of the fitted normal and the
 * pointwise 95 % band that the report carries.
 */
export function quantilePlot(plot: PlotData, words: QuantileWords): Figure {
  const { quantiles } = plot
  const theoretical = quantiles.map(point => point.theoretical)
  const reach = Math.max(1, ...theoretical.map(Math.abs)) * 1.05
  const x = linearAxis(words.normalQuantile, -reach, reach, { nice: false })
  const line = referenceLine(plot.fitted, x.domain)
  const heights = [...quantiles.flatMap(({ value, lower, upper }) => [value, lower, upper])]
  const y = heights.length > 0 ? linearAxis(words.quantity, least(heights), greatest(heights)) : linearAxis(words.quantity, 0, 1)
  const beside = quantiles[Math.floor(quantiles.length * 0.65)]
  return {
    kind: 'normal-quantile',
    title: words.title,
    x,
    y,
    bands: quantiles.length > 1 ? [{ role: 'reference', points: quantiles.map(({ theoretical: at, lower, upper }) => ({ x: at, lower, upper })) }] : [],
    bars: [],
    lines: line.length > 0 ? [{ role: 'reference', points: line }] : [],
    dots: quantiles.map(({ theoretical: at, value }) => ({ x: at, y: value })),
    labels: beside ? [{ role: 'reference', text: words.band, x: beside.theoretical, y: beside.lower, anchor: 'start' }] : [],
  }
}
