import { excessKurtosisKernel } from '../statistics/descriptive/excessKurtosis'
import { valuesAboutMediansKernel } from '../statistics/descriptive/residuals'
import { skewnessKernel } from '../statistics/descriptive/skewness'
import { standardDeviationKernel } from '../statistics/descriptive/standardDeviation'
import { shapiroWilkKernel } from '../statistics/normality/shapiroWilk'
import type { Outcome } from '../statistics/types'
import { viewValues } from './derive'
import { plotOf } from './plots'
import type { ArmReport, Figure, Measure, ProxyReport } from './report'
import { finite } from './checkReport'
import { type CompiledRule, type RuleSample, sizeOf, type Workspace } from './rule'

const finiteOr = (problem: unknown, x: number): number | null => (problem === null ? finite(x) : null)

/** Size and shape of each compared arm; no location. */
export function armReports(rule: CompiledRule, sample: RuleSample, arms: readonly string[], workspace: Workspace): ArmReport[] | null {
  const values = viewValues(0, rule, sample, workspace)
  if (values === null) return null
  const { figures } = workspace
  return arms.map((arm, group) => {
    const start = sample.offsets[group] ?? 0
    const end = sample.offsets[group + 1] ?? start
    return {
      arm,
      n: end - start,
      sd: end - start < 2 ? null : finite(standardDeviationKernel(values, start, end)),
      skewness: finiteOr(skewnessKernel(values, start, end, figures), figures.statistic),
      excessKurtosis: finiteOr(excessKurtosisKernel(values, start, end, figures), figures.statistic),
    }
  })
}

const plainFigure = (measure: Measure, { statistic, pValue, lower, upper }: Outcome): Figure => ({
  measure, value: finite(statistic), lower: finite(lower), upper: finite(upper), pValue: finite(pValue),
  adjustedP: null, df1: null, df2: null, limit: null, broken: null,
})

/**
 * What may be shown without arms: the shape of the values of every subject of the set about their overall
 * median. Never of the compared arms alone, since picking them needs the allocation.
 *
 * @param sample ungrouped values of the whole set, with a workspace of its own.
 */
export function proxyReport(rule: CompiledRule, sample: RuleSample, workspace: Workspace, unit: string, points: number): ProxyReport | null {
  const values = viewValues(0, rule, sample, workspace)
  if (values === null) return null
  const n = sizeOf(sample)
  const { figures, quantity, statistics } = workspace
  if (n > 0) valuesAboutMediansKernel(values, Uint32Array.of(0, n), quantity, statistics)
  const found: Figure[] = []
  if (skewnessKernel(quantity, 0, n, figures) === null) found.push(plainFigure('skewness', figures))
  if (excessKurtosisKernel(quantity, 0, n, figures) === null) found.push(plainFigure('excess-kurtosis', figures))
  if (shapiroWilkKernel(quantity, 0, n, statistics, figures) === null) found.push(plainFigure('shapiro-wilk', figures))
  return { n, figures: found, plot: plotOf(quantity.slice(0, n), 'values-about-median', unit, points) }
}
