import exp from '@stdlib/math-base-special-exp'
import type { PlotData } from '../decision/report'
import { linearAxis } from './axis'
import type { Dot, Figure, Label } from './figure'

export interface HistogramWords {
  readonly title: string
  /** Name of the judged quantity with its unit. */
  readonly quantity: string
  readonly count: string
  readonly fitted: string
}

/** Points of the fitted curve; enough to look smooth at page width. */
const CURVE_POINTS = 81
const ROOT_TWO_PI = 2.5066282746310002

interface Normal { readonly mean: number, readonly sd: number }

/** Density of the fitted normal, scaled to expected counts per bin. */
function fittedCurve({ mean, sd }: Normal, { edges, counts }: PlotData, [from, to]: readonly [number, number]): Dot[] {
  const first = edges[0] ?? 0
  const width = (edges[1] ?? first) - first
  const n = counts.reduce((sum, count) => sum + count, 0)
  return Array.from({ length: CURVE_POINTS }, (_, index) => {
    const x = from + (to - from) * index / (CURVE_POINTS - 1)
    const z = (x - mean) / sd
    return { x, y: n * width * exp(-z * z / 2) / (sd * ROOT_TWO_PI) }
  })
}

/** The label stands beside the curve's right flank, where it keeps clear of the summit. */
function curveLabel(text: string, { mean, sd }: Normal, curve: readonly Dot[], to: number): Label {
  const x = mean + 1.15 * sd
  const flank = curve.find(point => point.x >= x) ?? curve[curve.length - 1]
  const anchor = x > to - (to - mean) / 3 ? 'end' : 'start'
  return { role: 'fitted', text, x: Math.min(x, to), y: flank?.y ?? 0, anchor }
}

/**
 * Counts per bin with the fitted normal curve over them.
 *
 * @param plot reduced values of a report; bins of equal width, counts of subjects.
 */
export function histogram(plot: PlotData, words: HistogramWords): Figure {
  const x = linearAxis(words.quantity, plot.edges[0] ?? 0, plot.edges[plot.edges.length - 1] ?? 1)
  const fitted = plot.fitted !== null && plot.fitted.sd > 0 ? plot.fitted : null
  const curve = fitted ? fittedCurve(fitted, plot, x.domain) : []
  const summit = [...plot.counts, ...curve.map(point => point.y)].reduce((most, height) => Math.max(most, height), 1)
  return {
    kind: 'histogram',
    title: words.title,
    x,
    y: linearAxis(words.count, 0, summit, { ticks: 4 }),
    bands: [],
    bars: plot.counts.map((height, index) => ({ from: plot.edges[index] ?? 0, to: plot.edges[index + 1] ?? 0, height })),
    lines: fitted ? [{ role: 'fitted', points: curve }] : [],
    dots: [],
    labels: fitted ? [curveLabel(words.fitted, fitted, curve, x.domain[1])] : [],
  }
}
