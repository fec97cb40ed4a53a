import type { Requirement } from '../plan/prerequisiteSchema'
import { histogramBins } from '../statistics/descriptive/histogramBins'
import { meanKernel } from '../statistics/descriptive/mean'
import { normalQuantilePlot } from '../statistics/descriptive/normalQuantilePlot'
import { residualsByOwnSdKernel, residualsKernel, valuesAboutMediansKernel } from '../statistics/descriptive/residuals'
import { standardDeviationKernel } from '../statistics/descriptive/standardDeviation'
import { viewValues } from './derive'
import type { PlotData, Plotted } from './report'
import { type CompiledRule, type RuleSample, sizeOf, type Workspace } from './rule'

/** Quantile points that a whole report may carry, so that it stays below 200 kB. */
const POINTS_IN_REPORT = 1600
const MOST_POINTS = 400
const LEAST_POINTS = 24

/** Points of each plot when so many plots share a report. */
export const pointsFor = (plots: number): number => Math.max(LEAST_POINTS, Math.min(MOST_POINTS, Math.floor(POINTS_IN_REPORT / Math.max(1, plots))))

/** Plots are looked at, not computed with. */
const brief = (x: number): number => Number(x.toPrecision(6))

/** Evenly spaced members of a list, its ends among them. */
function thin<T>(list: readonly T[], most: number): T[] {
  if (list.length <= most) return [...list]
  return Array.from({ length: most }, (_, index) => list[Math.round(index * (list.length - 1) / (most - 1))]).filter(member => member !== undefined)
}

/** @param values centred values of the plotted quantity; not modified. */
export function plotOf(values: Float64Array, quantity: Plotted, unit: string, points: number): PlotData {
  const n = values.length
  if (n === 0) return { quantity, unit, edges: [], counts: [], fitted: null, quantiles: [] }
  const { edges, counts } = histogramBins(values)
  const sd = n < 2 ? 0 : standardDeviationKernel(values, 0, n)
  return {
    quantity, unit,
    edges: edges.map(brief),
    counts,
    fitted: sd > 0 ? { mean: brief(meanKernel(values, 0, n)), sd: brief(sd) } : null,
    quantiles: sd > 0
      ? thin(normalQuantilePlot(values), points).map(({ theoretical, value, lower, upper }) => ({ theoretical: brief(theoretical), value: brief(value), lower: brief(lower), upper: brief(upper) }))
      : [],
  }
}

/** What is plotted beside the first normality prerequisite: its own quantity, centred. */
function plottedBetweenArms(planned: readonly Requirement[]): Plotted {
  const judged = planned.find(({ kind }) => kind === 'normality')
  if (judged?.kind !== 'normality' || judged.quantity === 'residuals') return 'residuals'
  return judged.quantity === 'residuals-by-own-sd' ? judged.quantity : 'values-about-arm-medians'
}

/** Centred values of the quantity in question; residuals where those by own SD do not exist. */
function centre(quantity: Plotted, values: Float64Array, offsets: Uint32Array, workspace: Workspace): Plotted {
  if (quantity === 'residuals-by-own-sd' && residualsByOwnSdKernel(values, offsets, workspace.quantity) === null) return quantity
  if (quantity === 'residuals-by-own-sd' || quantity === 'residuals') {
    residualsKernel(values, offsets, workspace.quantity)
    return 'residuals'
  }
  valuesAboutMediansKernel(values, offsets, workspace.quantity, workspace.statistics)
  return quantity
}

/**
 * The plot of the judged quantity. Within subjects and against a constant the values stand about their own
 * median, between arms about each arm's centre: no plot shows a location.
 */
export function judgedPlot(rule: CompiledRule, sample: RuleSample, workspace: Workspace, unit: string, points: number): PlotData | null {
  const values = viewValues(0, rule, sample, workspace)
  if (values === null) return null
  const within: Plotted = sample.first === null ? 'values-about-median' : 'differences-about-median'
  const planned = rule.planned.flatMap(index => rule.checks[index]?.requirement ?? [])
  const quantity = centre(rule.groups > 1 ? plottedBetweenArms(planned) : within, values, sample.offsets, workspace)
  return plotOf(workspace.quantity.slice(0, sizeOf(sample)), quantity, quantity === 'residuals-by-own-sd' ? '1' : unit, points)
}
