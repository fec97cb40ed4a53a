import fc from 'fast-check'
import { expect, it } from 'vitest'
import { release } from '#shared/blinding/release'
import { judgeTrial } from '../helpers/judgeTrial'
import { naiveArmFree, naiveVerdict } from '../helpers/naiveRule'
import { trialPairs } from '../helpers/randomTrial'

// The properties of tests/unit/shared/decision and blinding once more, on many more plans and another seed.

const bare = (verdict: { word: string, step: string | null, reason: string | null, setAside: string | null } | null) =>
  (verdict === null ? null : { word: verdict.word, step: verdict.step, reason: verdict.reason, setAside: verdict.setAside })

it('judges forty thousand random trials as a naive reading does, and keeps their blind', () => {
  fc.assert(fc.property(trialPairs, ({ trial, otherAllocation }) => {
    const report = judgeTrial(trial)
    trial.plan.analyses.forEach((analysis, index) => {
      const { verdict, armFreeVerdict } = report.analyses[index]!
      expect(bare(verdict)).toEqual(naiveVerdict(trial, analysis))
      expect(bare(armFreeVerdict)).toEqual(naiveArmFree(trial, analysis))
    })
    if (trial.plan.blinding === 'open-label') return
    const state = { openLabel: false, blindBroken: false, released: 'none', namesFailed: trial.plan.release.namesFailed, registeredInLedger: true } as const
    const [one, other] = [report, judgeTrial(trial, otherAllocation)].map(each => JSON.stringify(release(each, { cleared: false }, state)))
    expect(one).toBe(other)
  }), { seed: 8128, numRuns: 40_000, unbiased: true, endOnFailure: true })
})
