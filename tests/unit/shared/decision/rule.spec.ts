import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { consistency } from '#shared/plan/consistency'
import { ANALYSIS_VERDICTS, REASONS } from '#shared/plan/terms'
import type { AnalysisReport, VerdictReport } from '#shared/decision/report'
import { decodeDecision } from '#shared/decision/codes'
import { makeWorkspace } from '#shared/decision/compileRule'
import { runRule } from '#shared/decision/runRule'
import { judgeTrial } from '../../../helpers/judgeTrial'
import { naiveArmFree, naiveVerdict, type NaiveVerdict } from '../../../helpers/naiveRule'
import { trials } from '../../../helpers/randomTrial'
import { ruleOfTrial } from '../../../helpers/ruleOfTrial'

const RUNS = { seed: 20261201, numRuns: 2000, unbiased: true, endOnFailure: true }
const LARGEST = 60

function told(verdict: VerdictReport | null): NaiveVerdict | null {
  if (verdict === null) return null
  const { word, step, reason, setAside } = verdict
  return { word, step, reason, setAside }
}

/** The step that stopped the walk carries its reason, and a check that could not be judged on data carries no figure. */
function expectStop({ verdict, steps, prerequisites }: AnalysisReport): void {
  const stopping = steps.find(({ step }) => step === verdict.step)
  if (stopping !== undefined && verdict.word === 'not-assessable') expect(stopping).toMatchObject({ outcome: 'not-assessable', reason: verdict.reason })
  const unjudged = ['data-query-open', 'analysis-set-undetermined', 'allocation-withheld']
  for (const each of prerequisites.filter(({ reason }) => reason !== null && unjudged.includes(reason))) expect([each.samples, each.figures]).toEqual([[], []])
}

describe('the decision rule', { timeout: 90_000 }, () => {
  it('is only ever asked about consistent plans here', () => {
    fc.assert(fc.property(trials, ({ plan }) => {
      expect(consistency(plan)).toEqual([])
    }), { ...RUNS, numRuns: 500 })
  })

  it('gives the verdict of a naive reading of the rule, on every branch', () => {
    const words = new Set<string>()
    const reasons = new Set<string | null>()
    const went = { on: 0, stopped: 0, byArms: 0, onArmFree: 0 }
    fc.assert(fc.property(trials, (trial) => {
      const report = judgeTrial(trial)
      trial.plan.analyses.forEach((analysis, index) => {
        const { verdict, armFreeVerdict } = report.analyses[index]!
        const { word, step, reason, setAside } = verdict
        expect(told(verdict)).toEqual(naiveVerdict(trial, analysis))
        expect(told(armFreeVerdict)).toEqual(naiveArmFree(trial, analysis))
        if (armFreeVerdict === null) went.byArms++
        else if (step !== null && setAside !== null && report.analyses[index]!.dependsOnArms) went.onArmFree++
        expectStop(report.analyses[index]!)
        words.add(word)
        reasons.add(reason)
        if (setAside !== null && step !== null) went.on++
        if (word === 'not-assessable' && step !== null) went.stopped++
      })
    }), RUNS)
    expect([...words].sort()).toEqual([...ANALYSIS_VERDICTS].sort())
    expect(REASONS.filter(reason => reason !== 'check-too-weak' && !reasons.has(reason))).toEqual([])
    expect(went.on).toBeGreaterThan(50)
    expect(went.stopped).toBeGreaterThan(20)
    expect(went.byArms).toBeGreaterThan(300)
    expect(went.onArmFree).toBeGreaterThan(3)
  })

  it('runs to the same code in a loop, on a workspace used before', () => {
    fc.assert(fc.property(trials, (trial) => {
      const report = judgeTrial(trial)
      trial.plan.analyses.forEach((analysis, index) => {
        const { rule, sample } = ruleOfTrial(trial, analysis, report)
        const workspace = makeWorkspace(rule, LARGEST)
        workspace.trace.fill(1)
        workspace.quantity.fill(7)
        const codes = [runRule(rule, sample, workspace), runRule(rule, sample, workspace)]
        const { word, step, reason, setAside } = report.analyses[index]!.verdict
        const place = step === null ? null : analysis.fallbacks.findIndex(({ id }) => id === step)
        for (const code of codes) expect(decodeDecision(code)).toEqual({ word, step: place, reason, setAside })
      })
    }), RUNS)
  })
})
