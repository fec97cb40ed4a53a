import type { PlannedAnalysis } from '../plan/analysisSchema'
import { changesQuestion } from '../plan/changesQuestion'
import type { Plan } from '../plan/schema'
import type { Reason } from '../plan/terms'
import { armKnowledge, comparedArms } from './arms'
import { armReports, proxyReport } from './armFigures'
import { checkReport } from './checkReport'
import { APPLIES, type Decision, NOT_ASSESSABLE, outcome, outcomeReason, PREREQUISITE_NOT_MET, STEP_NOT_ASSESSABLE, STEP_OUTCOMES } from './codes'
import type { Allocation } from './columns'
import { compileRule, makeWorkspace } from './compileRule'
import { type ExtractIndex, setDetermined } from './extractIndex'
import { judgedPlot } from './plots'
import type { AnalysisReport, PlotData, PrerequisiteReport, ProxyReport, ScreenReport, StepReport, VerdictReport } from './report'
import type { CompiledRule, RuleSample, Workspace } from './rule'
import { decide } from './runRule'
import { makeSample } from './sample'
import { type ScreenHit, touches } from './screen'
import { select, type Selection } from './select'
import { checkAt, judgeCheck } from './walk'

/** What all analyses of one extract share. */
export interface JudgeContext {
  readonly plan: Plan
  readonly index: ExtractIndex
  readonly hits: readonly { readonly hit: ScreenHit, readonly report: ScreenReport }[]
  /** Null while a blinded study has no allocation list. */
  readonly allocation: Allocation | null
  readonly decisionPoint: boolean
  readonly subjectsExpected: number
  readonly points: number
}

/** One analysis on its way from rows to report. */
interface Judging {
  readonly context: JudgeContext
  readonly analysis: PlannedAnalysis
  readonly selection: Selection
  readonly rule: CompiledRule
  readonly sample: RuleSample
  readonly workspace: Workspace
  /** Why nothing at all can be judged on the data. */
  readonly barred: Reason | null
}

function begin(context: JudgeContext, analysis: PlannedAnalysis): Judging {
  const { plan, index, hits, allocation, decisionPoint, subjectsExpected } = context
  const selection = select(plan, analysis, index, decisionPoint)
  const selected = new Set(selection.rows)
  const queryOpen = hits.some(({ hit, report }) => report.query === 'open' && touches(plan, analysis, hit, index.columns, selected))
  const setUndetermined = !setDetermined(plan, index, analysis.analysisSet)
  const knowledge = armKnowledge(plan, selection, allocation)
  const sample = makeSample(analysis, selection, knowledge, allocation, { queryOpen, setUndetermined, decisionPoint, subjectsExpected })
  const rule = compileRule(plan, analysis)
  const barred = queryOpen ? 'data-query-open' : setUndetermined ? 'analysis-set-undetermined' : null
  return { context, analysis, selection, rule, sample, workspace: makeWorkspace(rule, sample.value.length), barred }
}

function verdictReport({ analysis }: Judging, { word, step, reason, setAside }: Decision): VerdictReport {
  const named = step === null ? undefined : analysis.fallbacks[step]
  return { word, step: named?.id ?? null, reason, setAside, changesQuestion: named !== undefined && changesQuestion(analysis, named) }
}

function reportCheck({ analysis, rule, sample, workspace, barred }: Judging, index: number, consequence: PrerequisiteReport['consequence']): PrerequisiteReport {
  const check = checkAt(rule, index)
  const judged = barred === null ? judgeCheck(index, rule, sample, workspace) : outcome(NOT_ASSESSABLE, barred)
  const told = barred === null && !(check.dependsOnArms && sample.arms !== 'known')
  return checkReport(check, judged, consequence, comparedArms(analysis), workspace, told)
}

function stepReport(judging: Judging, index: number): StepReport[] {
  const { analysis, rule, workspace } = judging
  const step = analysis.fallbacks[index]
  if (step === undefined) return []
  const became = workspace.stepOutcomes[index] ?? 0
  const reached = became === APPLIES || became === PREREQUISITE_NOT_MET || became === STEP_NOT_ASSESSABLE
  return [{
    step: step.id,
    method: step.method,
    summaryMeasure: step.summaryMeasure,
    changesQuestion: changesQuestion(analysis, step),
    triggered: reached,
    outcome: STEP_OUTCOMES[became] ?? 'not-reached',
    reason: became === STEP_NOT_ASSESSABLE ? outcomeReason(workspace.stepReasons[index] ?? 0) : null,
    prerequisites: reached ? (rule.steps[index]?.checks ?? []).map(check => reportCheck(judging, check, 'required')) : [],
  }]
}

function unitOf({ context: { plan }, analysis }: Judging): string {
  const endpoint = plan.endpoints.find(({ id }) => id === analysis.endpoint)
  return endpoint?.derivation === 'percent-change' ? '%' : endpoint?.unit ?? '1'
}

/** Arms unknown, over every subject of the set; in open-label studies the plot itself is there for all. */
function proxyOf(judging: Judging): ProxyReport | null {
  const { context, analysis, selection, rule, sample, barred } = judging
  if (barred !== null || !rule.dependsOnArms || context.plan.blinding === 'open-label') return null
  const whole = makeSample(analysis, selection, 'none', null, sample)
  return proxyReport(rule, whole, makeWorkspace(rule, whole.value.length), unitOf(judging), context.points)
}

/** Between arms the plot is formed with arms, and so stands only in reports that hold arm-dependent figures anyway. */
function plotOfJudged(judging: Judging): PlotData | null {
  const { context, rule, sample, workspace, barred } = judging
  const formedWithArms = rule.groups > 1
  const allowed = !formedWithArms || (sample.arms === 'known' && (rule.dependsOnArms || context.plan.blinding === 'open-label'))
  return barred === null && allowed ? judgedPlot(rule, sample, workspace, unitOf(judging), context.points) : null
}

/** Judges one planned analysis; the workspace with its intermediate figures stays inside. */
export function judgeAnalysis(context: JudgeContext, analysis: PlannedAnalysis): AnalysisReport {
  const judging = begin(context, analysis)
  const { rule, sample, workspace, selection, barred } = judging
  const { decision, armFree } = decide(rule, sample, workspace)
  const arms = comparedArms(analysis)
  return {
    analysis: analysis.id,
    method: analysis.method,
    summaryMeasure: analysis.summaryMeasure,
    dependsOnArms: rule.dependsOnArms,
    selection: selection.report,
    verdict: verdictReport(judging, decision),
    armFreeVerdict: armFree === null ? null : verdictReport(judging, armFree),
    prerequisites: rule.planned.map((index, place) => reportCheck(judging, index, analysis.prerequisites[place]?.onFailure ?? 'reported-only')),
    steps: analysis.fallbacks.flatMap((_, index) => stepReport(judging, index)),
    proxy: proxyOf(judging),
    byArm: arms.length > 0 && barred === null && sample.arms === 'known' ? armReports(rule, sample, arms, workspace) : null,
    plot: plotOfJudged(judging),
  }
}
