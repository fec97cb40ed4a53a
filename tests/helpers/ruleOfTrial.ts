import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import { armKnowledge, armsInExtract } from '#shared/decision/arms'
import { compileRule } from '#shared/decision/compileRule'
import { indexExtract, setDetermined } from '#shared/decision/extractIndex'
import type { Report } from '#shared/decision/report'
import type { CompiledRule, RuleSample } from '#shared/decision/rule'
import { makeSample } from '#shared/decision/sample'
import { select } from '#shared/decision/select'
import { subjectsExpected } from '#shared/decision/standing'
import { columnsOf, IDENTITY } from './judgeTrial'
import type { Trial } from './randomTrial'

/** Rule and sample of one analysis, put together without the judge; what only screens know is taken from its report. */
export function ruleOfTrial({ plan, rows, allocation, purpose }: Trial, analysis: PlannedAnalysis, report: Report): { rule: CompiledRule, sample: RuleSample } {
  const open = plan.blinding === 'open-label'
  const columns = columnsOf(rows, open ? allocation : null)
  const index = indexExtract(plan, columns)
  const decisionPoint = purpose === 'database-lock'
  const selection = select(plan, analysis, index, decisionPoint)
  const arms = open ? armsInExtract(columns) : allocation
  const own = report.analyses.find(each => each.analysis === analysis.id)
  const sample = makeSample(analysis, selection, armKnowledge(plan, selection, arms), arms, {
    decisionPoint,
    queryOpen: own?.verdict.reason === 'data-query-open',
    setUndetermined: !setDetermined(plan, index, analysis.analysisSet),
    subjectsExpected: subjectsExpected(plan, { ...IDENTITY, purpose }),
  })
  return { rule: compileRule(plan, analysis), sample }
}
