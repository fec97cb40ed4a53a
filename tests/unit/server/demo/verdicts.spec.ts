import { beforeAll, describe, expect, it } from 'vitest'
import type { AnalysisReport, Figure, PrerequisiteReport, Report } from '#shared/decision/report'
import { LARKMOOR_SEED, THORNEY_SEED } from '../../../../server/demo/seeds'
import { larkmoorReports, thorneyReport } from '../../../helpers/demoReports'

let reports: Report[]
beforeAll(async () => {
  reports = await larkmoorReports(LARKMOOR_SEED)
})

const wordOf = ({ verdict: { word, step, reason } }: AnalysisReport) => [word, step ?? reason].filter(part => part !== null).join(' ')
const analysisOf = (report: Report, id: string) => report.analyses.find(({ analysis }) => analysis === id)!

/** What the plan promises of the scenario: twelve verdicts of the blinded study. */
const EXPECTED = {
  'COUGH-HIGH': ['not-assessable too-few-data', 'planned-method-stands', 'fallback-applies WELCH'],
  'CRP-ALL': ['not-assessable too-few-subjects', 'fallback-applies LOG', 'fallback-applies LOG'],
  'FEV-HIGH': ['planned-method-stands', 'planned-method-stands', 'planned-method-stands'],
  'RESCUE-LOW': ['not-assessable too-many-missing', 'no-registered-method', 'no-registered-method'],
} as const

/** How far a figure stands from its limit, as a factor; p-values and sizes alike. */
function margin({ value, pValue, adjustedP, limit }: Figure): number {
  const held = Math.abs(adjustedP ?? pValue ?? value!)
  return Math.max(held / limit!, limit! / held)
}

const judged = ({ samples, figures }: PrerequisiteReport) => [...figures, ...samples.flatMap(sample => sample.figures)].filter(({ limit }) => limit !== null)

/**
 * A prerequisite whose size and level must both break is clear of its limits when the figure that decides is:
 * either of them when it is met, both when it is not.
 */
function clearance(prerequisite: PrerequisiteReport): number {
  const figures = judged(prerequisite)
  const decisive = prerequisite.verdict === 'met' && figures.some(({ broken }) => broken === false) ? figures.filter(({ broken }) => broken === false) : figures
  const margins = decisive.map(margin)
  return prerequisite.verdict === 'met' ? Math.max(...margins) : Math.min(...margins)
}

describe('the demo', () => {
  it.each(Object.entries(EXPECTED))('%s comes out as the scenario says at both looks and at lock', (id, words) => {
    expect(reports.map(report => wordOf(analysisOf(report, id)))).toEqual(words)
  })

  it.each(['COUGH-HIGH', 'CRP-ALL', 'RESCUE-LOW'])('%s stands clear of every limit that decides it', (id) => {
    const decisive = reports.slice(1).flatMap((report) => {
      const { prerequisites, steps } = analysisOf(report, id)
      return [...prerequisites.filter(({ consequence }) => consequence === 'switch'), ...steps.flatMap(step => step.prerequisites)]
    }).filter(prerequisite => judged(prerequisite).length > 0 && prerequisite.kind !== 'positive-values' && prerequisite.kind !== 'count')
    expect(decisive.length).toBeGreaterThan(2)
    for (const prerequisite of decisive) expect(clearance(prerequisite), `${prerequisite.prerequisite} ${prerequisite.verdict}`).toBeGreaterThan(1.2)
  })

  it('has zeros among the rescue doses, so that the logarithm is no way out', () => {
    const { prerequisites } = analysisOf(reports[2]!, 'RESCUE-LOW').steps.find(({ step }) => step === 'LOG')!
    expect(prerequisites.find(({ kind }) => kind === 'positive-values')!.verdict).toBe('not-met')
  })

  it('lets the open-label study show a fallback and a method that stands', async () => {
    const report = await thorneyReport(THORNEY_SEED)
    expect(report.analyses.map(wordOf)).toEqual(['fallback-applies WELCH', 'planned-method-stands'])
  })

  it('is drawn alike every time', async () => {
    expect(await larkmoorReports(LARKMOOR_SEED)).toEqual(reports)
  })
})
