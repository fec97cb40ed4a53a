import type { Reason } from '../plan/terms'
import { type Decision, encodeDecision, MET, NOT_ASSESSABLE, NOT_MET, NOT_REACHED, outcomeReason, outcomeVerdict, UNJUDGED } from './codes'
import type { CompiledRule, RuleSample, Workspace } from './rule'
import { checkAt, judgeCheck, judgeSwitches, walk } from './walk'

/** What a run found: the decision, and what causes free of arms decide by themselves. */
export interface Run {
  readonly decision: Decision
  /** Null where only arms tell. */
  readonly armFree: Decision | null
}

const notAssessable = (reason: Reason, step: number | null = null): Decision => ({ word: 'not-assessable', step, reason, setAside: null })

function reset(workspace: Workspace): void {
  workspace.outcomes.fill(UNJUDGED)
  workspace.stepOutcomes.fill(NOT_REACHED)
  workspace.stepReasons.fill(0)
  workspace.touchedArms = false
  for (const view of workspace.views) view.ready = false
}

/** The reason of the first failed hold among some checks, in the plan's order. */
function failedHold(indices: readonly number[], rule: CompiledRule, sample: RuleSample, workspace: Workspace): Reason | null {
  for (const index of indices) {
    const judged = judgeCheck(index, rule, sample, workspace)
    const verdict = outcomeVerdict(judged)
    if (verdict === NOT_ASSESSABLE) return outcomeReason(judged)
    if (verdict === NOT_MET) return checkAt(rule, index).requirement.kind === 'count' ? 'too-few-subjects' : 'too-many-missing'
  }
  return null
}

/**
 * `Not assessable` as it stands before the decision point; there the walk goes on from the registered step.
 * Where that walk would need arms that are not known, nothing can be judged.
 */
function standOrGoOn(found: Decision, failed: number, rule: CompiledRule, sample: RuleSample, workspace: Workspace): Decision {
  if (!sample.decisionPoint) return found
  const setAside = found.reason
  if (rule.leadsTo < 0) return { word: 'no-registered-method', step: null, reason: null, setAside }
  const decision = walk({ step: rule.leadsTo, lenient: true }, failed, rule, sample, workspace)
  if (workspace.touchedArms && sample.arms !== 'known') return notAssessable('allocation-withheld')
  return { ...decision, setAside }
}

function decideByArms(rule: CompiledRule, sample: RuleSample, workspace: Workspace): Decision {
  if (rule.dependsOnArms && sample.arms !== 'known') return notAssessable('allocation-withheld')
  const held = failedHold(rule.holds.byArms, rule, sample, workspace)
  const { failed, open } = judgeSwitches(rule, sample, workspace)
  const reason = held ?? (open === MET ? null : outcomeReason(open))
  if (reason !== null) return standOrGoOn(notAssessable(reason), failed, rule, sample, workspace)
  if (failed === 0) return { word: 'planned-method-stands', step: null, reason: null, setAside: null }
  const decision = walk({ step: 0, lenient: false }, failed, rule, sample, workspace)
  return decision.word === 'not-assessable' ? standOrGoOn(decision, failed, rule, sample, workspace) : decision
}

/**
 * Runs the decision rule of one planned analysis. Causes that need no arms come first, always in the same order:
 * open data query, no allocation list, set not determined, holds that are free of arms; then the walk.
 */
export function decide(rule: CompiledRule, sample: RuleSample, workspace: Workspace): Run {
  reset(workspace)
  if (sample.queryOpen) return alone(notAssessable('data-query-open'))
  if (rule.dependsOnArms && sample.arms === 'none') return alone(notAssessable('allocation-withheld'))
  const cause = sample.setUndetermined ? 'analysis-set-undetermined' : failedHold(rule.holds.armFree, rule, sample, workspace)
  if (cause === null) {
    const decision = decideByArms(rule, sample, workspace)
    return { decision, armFree: rule.dependsOnArms ? null : decision }
  }
  if (!sample.decisionPoint) return alone(notAssessable(cause))
  const { failed } = judgeSwitches(rule, sample, workspace)
  const decision = standOrGoOn(notAssessable(cause), failed, rule, sample, workspace)
  return { decision, armFree: workspace.touchedArms ? null : decision }
}

const alone = (decision: Decision): Run => ({ decision, armFree: decision })

/** The decision alone as one integer (`decodeDecision` reads it): what a loop over simulated studies needs. */
export function runRule(rule: CompiledRule, sample: RuleSample, workspace: Workspace): number {
  return encodeDecision(decide(rule, sample, workspace).decision)
}
