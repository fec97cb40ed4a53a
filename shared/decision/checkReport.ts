import type { Consequence, PrerequisiteVerdict } from '../plan/terms'
import { PREREQUISITE_VERDICTS } from '../plan/terms'
import { outcomeReason, outcomeVerdict } from './codes'
import type { Figure, Measure, PrerequisiteReport, SampleReport } from './report'
import {
  ADJUSTED_P, BROKEN, type Check, DF1, DF2, figureAt, LIMIT, LOWER, P_VALUE, sampleAt, UPPER, VALUE, wholeAt, type Workspace,
} from './rule'

/** NaN and infinities never leave the judge. */
export const finite = (x: number | undefined): number | null => (x !== undefined && Number.isFinite(x) ? x : null)

const broken = (x: number | undefined): boolean | null => (x === undefined || Number.isNaN(x) ? null : x === 1)

function figure(measure: Measure, at: number, { trace }: Workspace): Figure {
  const field = (offset: number) => finite(trace[at + offset])
  return {
    measure,
    value: field(VALUE), lower: field(LOWER), upper: field(UPPER),
    pValue: field(P_VALUE), adjustedP: field(ADJUSTED_P), df1: field(DF1), df2: field(DF2),
    limit: field(LIMIT), broken: broken(trace[at + BROKEN]),
  }
}

/** A figure that was not computed is left out rather than shown as a row of nothing. */
const computed = ({ value }: Figure): boolean => value !== null

function sampleReports({ layout }: Check, arms: readonly string[], workspace: Workspace): SampleReport[] {
  return Array.from({ length: layout.samples }, (_, sample) => {
    const head = sampleAt(layout, sample)
    return {
      arm: layout.samples > 1 ? arms[sample] ?? null : null,
      n: finite(workspace.trace[head + VALUE]) ?? 0,
      figures: layout.sampleMeasures.map((measure, index) => figure(measure, figureAt(layout, sample, index), workspace)).filter(computed),
      broken: broken(workspace.trace[head + BROKEN]),
    }
  })
}

const verdictWord = (judged: number): PrerequisiteVerdict => PREREQUISITE_VERDICTS[outcomeVerdict(judged)] ?? 'not-assessable'

/**
 * A judged check as it stands in the report.
 *
 * @param judged its packed outcome.
 * @param told whether it was judged on data: a check that could not be has no figures.
 */
export function checkReport(check: Check, judged: number, consequence: Consequence | 'required', arms: readonly string[], workspace: Workspace, told: boolean): PrerequisiteReport {
  const { requirement, dependsOnArms, layout } = check
  return {
    prerequisite: requirement.id,
    kind: requirement.kind,
    quantity: 'quantity' in requirement ? requirement.quantity : null,
    consequence,
    dependsOnArms,
    verdict: verdictWord(judged),
    reason: outcomeReason(judged),
    samples: told ? sampleReports(check, arms, workspace) : [],
    figures: told ? layout.wholeMeasures.map((measure, index) => figure(measure, wholeAt(layout, index), workspace)).filter(computed) : [],
  }
}
