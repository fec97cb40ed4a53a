import {
  APPLIES, type Decision, MET, NOT_ASSESSABLE, NOT_MET, NOT_TRIGGERED, outcome, outcomeReason, outcomeVerdict, PREREQUISITE_NOT_MET,
  STEP_NOT_ASSESSABLE, UNJUDGED,
} from './codes'
import type { Check, CompiledRule, CompiledStep, RuleSample, Workspace } from './rule'

/** Judges a check once per run; one that is formed with arms needs to know them all. */
export function judgeCheck(index: number, rule: CompiledRule, sample: RuleSample, workspace: Workspace): number {
  const known = workspace.outcomes[index] ?? UNJUDGED
  if (known !== UNJUDGED) return known
  const check = checkAt(rule, index)
  const judged = check.dependsOnArms && sample.arms !== 'known'
    ? outcome(NOT_ASSESSABLE, 'allocation-withheld')
    : check.judge(sample, workspace)
  workspace.outcomes[index] = judged
  return judged
}

export function checkAt({ checks }: CompiledRule, index: number): Check {
  const check = checks[index]
  if (check === undefined) throw new RangeError(`no check ${index}`)
  return check
}

/** Bits of the switch prerequisites that failed, and the first that is not assessable. */
export function judgeSwitches(rule: CompiledRule, sample: RuleSample, workspace: Workspace): { failed: number, open: number } {
  let failed = 0
  let open = MET
  for (let bit = 0; bit < rule.switches.length; bit++) {
    const judged = judgeCheck(rule.switches[bit] ?? 0, rule, sample, workspace)
    const verdict = outcomeVerdict(judged)
    if (verdict === NOT_MET) failed |= 1 << bit
    else if (verdict === NOT_ASSESSABLE && open === MET) open = judged
  }
  return { failed, open }
}

function triggered({ trigger, mask }: CompiledStep, failed: number): boolean {
  if (trigger === 'any') return failed !== 0
  return trigger === 'at-least' ? (failed & mask) === mask : failed === mask
}

/**
 * Judges a step's own prerequisites: `NOT_MET` when any is, else the first that is not assessable, else `MET`.
 * Notes when the answer hangs on arms, which it does not where one that is free of arms fails anyway.
 */
function judgeStep(step: CompiledStep, rule: CompiledRule, sample: RuleSample, workspace: Workspace, lenient: boolean): number {
  let failed = false
  let failedArmFree = false
  let asksArms = false
  let open = MET
  for (const index of step.checks) {
    const judged = judgeCheck(index, rule, sample, workspace)
    const verdict = outcomeVerdict(judged)
    const { dependsOnArms } = checkAt(rule, index)
    asksArms ||= dependsOnArms
    failed ||= verdict === NOT_MET
    failedArmFree ||= !dependsOnArms && (verdict === NOT_MET || (lenient && verdict === NOT_ASSESSABLE))
    if (verdict === NOT_ASSESSABLE && open === MET) open = judged
  }
  workspace.touchedArms ||= asksArms && !failedArmFree
  return failed ? outcome(NOT_MET) : open
}

export interface Start {
  readonly step: number
  /** At the decision point the walk goes on: its first step counts as triggered, one that is not assessable as not met. */
  readonly lenient: boolean
}

function note(workspace: Workspace, step: number, what: number, judged = MET): void {
  workspace.stepOutcomes[step] = what
  workspace.stepReasons[step] = judged
}

const ended = (word: Decision['word'], step: number | null, reason: Decision['reason']): Decision => ({ word, step, reason, setAside: null })

/** Walks the steps in order until one applies, one stops the walk, or none is left. */
export function walk({ step: from, lenient }: Start, failed: number, rule: CompiledRule, sample: RuleSample, workspace: Workspace): Decision {
  for (let index = from; index < rule.steps.length; index++) {
    const step = rule.steps[index]
    if (step === undefined) break
    const given = lenient && index === from
    workspace.touchedArms ||= !given && rule.switchesDependOnArms
    if (!given && !triggered(step, failed)) {
      note(workspace, index, NOT_TRIGGERED)
      continue
    }
    const judged = judgeStep(step, rule, sample, workspace, lenient)
    const verdict = outcomeVerdict(judged)
    if (verdict === MET) {
      note(workspace, index, APPLIES)
      return ended('fallback-applies', index, null)
    }
    note(workspace, index, verdict === NOT_MET ? PREREQUISITE_NOT_MET : STEP_NOT_ASSESSABLE, judged)
    if (verdict === NOT_ASSESSABLE && !lenient) return ended('not-assessable', index, outcomeReason(judged))
  }
  return ended('no-registered-method', null, null)
}
