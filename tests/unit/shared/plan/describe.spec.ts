import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { describeComparison, describeFallback, describePrerequisite } from '#shared/plan/describe'
import { type Phrase, wordPhrase } from '#shared/plan/phrase'
import { say } from '#shared/wording/say'
import { normality, perArm, plainAnalysis, plainPlan, spread } from '../../../helpers/plainPlan'
import { trials } from '../../../helpers/randomTrial'

const words = (phrase: Phrase) => wordPhrase(phrase, (key, params) => say('en', key, params))

describe('describe', () => {
  it('says in one sentence when a prerequisite fails', () => {
    expect(words(describePrerequisite(normality))).toBe('Normality of residuals divided by their own arm’s SD, from 8 values on: fails at a skewness G1 of either sign beyond 1 (read by the nearer confidence limit below 50 values, by the estimate from there), together with p ≤ 0.05 in Shapiro–Wilk.')
    expect(words(describePrerequisite(spread))).toBe('Equal spread of values within each arm, from 5 values an arm on: fails at a ratio of largest to smallest SD beyond 1.5 (read by the estimate), or p ≤ 0.05 in Brown–Forsythe.')
    expect(words(describePrerequisite(perArm))).toBe('At least 5 subjects with a usable value in each arm.')
  })

  it('says what a step is and when it is tried', () => {
    expect(describeFallback(plainAnalysis.fallbacks[1]!).slice(0, 4).map(words)).toEqual([
      'planned method on logarithms',
      'logarithm to base e, taken before the derivation (source: Earlier trial)',
      'when at least normality failed',
      'Every value lies above zero.',
    ])
  })

  it('names arms and visits by their labels', () => {
    expect(words(describeComparison(plainPlan, plainAnalysis))).toBe('High dose, Placebo at Week 8, one contrast')
  })

  it('has words for whatever a plan may say', () => {
    fc.assert(fc.property(trials, ({ plan }) => {
      for (const analysis of plan.analyses) {
        const phrases = [describeComparison(plan, analysis), ...analysis.prerequisites.map(describePrerequisite), ...analysis.fallbacks.flatMap(describeFallback)]
        for (const phrase of phrases) expect(words(phrase)).not.toMatch(/[{}]|undefined/)
      }
    }), { seed: 5, numRuns: 300 })
  })
})
