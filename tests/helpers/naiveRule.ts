import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import { all, judgeOne } from './naivePrerequisites'
import { Situation } from './naiveSituation'
import type { Trial } from './randomTrial'

/**
 * The decision rule read a second time, sentence by sentence, over plain lists: no compiled rule, no workspace,
 * no codes.
 */
export interface NaiveVerdict { word: string, step: string | null, reason: string | null, setAside: string | null }

function queryOpen({ trial: { plan }, selected }: Situation): boolean {
  const keys = selected.map(({ subject, visit }) => `${subject} ${visit}`)
  if (new Set(keys).size < keys.length) return true
  const [endpoint] = plan.endpoints
  const held = (plan.screens.find(({ kind }) => kind === 'impossible-value')?.action ?? 'hold') === 'hold'
  const low = (x: number) => endpoint!.possible.min !== null && x < endpoint!.possible.min
  return held && selected.some(({ value, baseline }) => low(value) || (endpoint!.derivation !== 'none' && low(baseline)))
}

const not = (reason: string, step: string | null = null): NaiveVerdict => ({ word: 'not-assessable', step, reason, setAside: null })

/** Walks from a step on; `goingOn` is the walk at the decision point. */
function walkFrom(situation: Situation, from: number, failed: string[], goingOn: boolean): NaiveVerdict {
  const { fallbacks } = situation.analysis
  for (const [index, step] of fallbacks.entries()) {
    if (index < from) continue
    const { trigger } = step
    const named = trigger.kind === 'any' ? [] : trigger.of
    const fires = trigger.kind === 'any' ? failed.length > 0 : named.every(id => failed.includes(id)) && (trigger.kind === 'at-least' || failed.length === named.length)
    if (!fires && !(goingOn && index === from)) continue
    const own = step.prerequisites.map(requirement => judgeOne(situation, requirement, step.transformation))
    const verdict = all(own)
    if (verdict.is === 'met') return { word: 'fallback-applies', step: step.id, reason: null, setAside: null }
    if (verdict.is === 'not assessable' && !goingOn) return not(verdict.reason, step.id)
  }
  return { word: 'no-registered-method', step: null, reason: null, setAside: null }
}

/** Whether a walk from the registered step would hang on arms; asked only while some arms are not known. */
function hangsOnArms(situation: Situation, from: number): boolean {
  const { fallbacks, prerequisites } = situation.analysis
  const step = fallbacks[from]!
  const armFree = step.prerequisites.filter(each => !situation.byArms(each))
  const fails = armFree.some(each => judgeOne(situation, each, step.transformation).is !== 'met')
  if (!fails) return armFree.length < step.prerequisites.length
  if (from + 1 === fallbacks.length) return false
  return prerequisites.some(each => each.onFailure === 'switch' && situation.byArms(each)) || hangsOnArmsLater(situation, from)
}

function hangsOnArmsLater(situation: Situation, from: number): boolean {
  const failed = failedSwitches(situation)
  const { fallbacks } = situation.analysis
  for (const [index, step] of fallbacks.entries()) {
    if (index <= from) continue
    const fires = step.trigger.kind === 'any' ? failed.length > 0 : step.trigger.of.every(id => failed.includes(id)) && (step.trigger.kind === 'at-least' || failed.length === step.trigger.of.length)
    if (!fires) continue
    const armFree = step.prerequisites.filter(each => !situation.byArms(each))
    if (armFree.some(each => judgeOne(situation, each, step.transformation).is !== 'met')) continue
    return armFree.length < step.prerequisites.length
  }
  return false
}

const failedSwitches = (situation: Situation) => situation.analysis.prerequisites
  .filter(each => each.onFailure === 'switch' && judgeOne(situation, each, null).is === 'not met').map(({ id }) => id)

function goOn(situation: Situation, found: NaiveVerdict, failed: string[]): NaiveVerdict {
  if (!situation.atTheEnd()) return found
  const leadsTo = situation.analysis.fallbacks.findIndex(({ id }) => id === situation.analysis.notAssessableLeadsTo)
  if (leadsTo < 0) return { word: 'no-registered-method', step: null, reason: null, setAside: found.reason }
  const known = situation.trial.allocation !== null && situation.everybodyAllocated()
  if (!known && situation.needsArms() && hangsOnArms(situation, leadsTo)) return not('allocation-withheld')
  return { ...walkFrom(situation, leadsTo, failed, true), setAside: found.reason }
}

function holdReason(situation: Situation, armFree: boolean): string | null {
  for (const each of situation.analysis.prerequisites) {
    if (each.onFailure !== 'hold' || situation.byArms(each) === armFree) continue
    const found = judgeOne(situation, each, null)
    if (found.is === 'not assessable') return found.reason
    if (found.is === 'not met') return each.kind === 'count' ? 'too-few-subjects' : 'too-many-missing'
  }
  return null
}

/** The verdict of one planned analysis by PRODUCT's decision rule. */
export function naiveVerdict(trial: Trial, analysis: PlannedAnalysis): NaiveVerdict {
  const situation = new Situation(trial, analysis)
  if (queryOpen(situation)) return not('data-query-open')
  const needsArms = situation.needsArms()
  if (needsArms && trial.allocation === null) return not('allocation-withheld')
  const failed = failedSwitches(situation)
  const undetermined = trial.rows.length === 0
  const cause = undetermined ? 'analysis-set-undetermined' : holdReason(situation, true)
  if (cause !== null) return goOn(situation, not(cause), failed)
  if (needsArms && !situation.everybodyAllocated()) return not('allocation-withheld')
  const held = holdReason(situation, false)
  if (held !== null) return goOn(situation, not(held), failed)
  for (const each of analysis.prerequisites.filter(({ onFailure }) => onFailure === 'switch')) {
    const found = judgeOne(situation, each, null)
    if (found.is === 'not assessable') return goOn(situation, not(found.reason), failed)
  }
  if (failed.length === 0) return { word: 'planned-method-stands', step: null, reason: null, setAside: null }
  const verdict = walkFrom(situation, 0, failed, false)
  return verdict.word === 'not-assessable' ? goOn(situation, verdict, failed) : verdict
}

/** What is decided by causes that need no arms: all of it in an analysis without arms; null where arms tell. */
export function naiveArmFree(trial: Trial, analysis: PlannedAnalysis): NaiveVerdict | null {
  const situation = new Situation(trial, analysis)
  const verdict = naiveVerdict(trial, analysis)
  if (!situation.needsArms() || queryOpen(situation) || trial.allocation === null) return verdict
  const cause = trial.rows.length === 0 || holdReason(situation, true) !== null
  if (!cause) return null
  const leadsTo = analysis.fallbacks.findIndex(({ id }) => id === analysis.notAssessableLeadsTo)
  return situation.atTheEnd() && leadsTo >= 0 && hangsOnArms(situation, leadsTo) ? null : verdict
}
