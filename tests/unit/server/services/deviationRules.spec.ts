import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { DEVIATION_STATES } from '#shared/contract/deviations'
import { ANALYSIS_VERDICTS } from '#shared/plan/terms'
import { acknowledgementState, classOf, settlementsAllowed, type SettlementFacts } from '../../../../server/services/deviationRules'

const fallback: SettlementFacts = { state: 'open', word: 'fallback-applies', dependsOnArms: false, atDecisionPoint: false, blindBroken: false }

describe('classOf', () => {
  it.each([
    [['fallback-applies'], false, 'foreseen-switch'],
    [['no-registered-method'], false, 'unresolved'],
    [['no-registered-method', 'not-assessable'], false, 'unresolved'],
    [['no-registered-method', 'planned-method-stands'], false, 'foreseen-switch'],
    [['fallback-applies', 'no-registered-method'], false, 'unresolved'],
    [['no-registered-method'], true, 'departure'],
  ] as const)('of %j, overruled %s, is %s', (words, overruled, expected) => {
    expect(classOf(words, overruled)).toBe(expected)
  })
})

describe('settlementsAllowed', () => {
  it('offers everything for an arm-free fallback before the decision point', () => {
    expect(settlementsAllowed(fallback)).toEqual(['accept-step', 'keep-under-observation', 'amend-plan', 'report-without-claim', 'overrule'])
  })

  it('observes only before the decision point', () => {
    expect(settlementsAllowed({ ...fallback, atDecisionPoint: true })).not.toContain('keep-under-observation')
  })

  it('neither amends nor overrules once the blind is broken', () => {
    const broken = settlementsAllowed({ ...fallback, blindBroken: true })
    expect(broken).not.toContain('amend-plan')
    expect(broken).not.toContain('overrule')
  })

  it('never overrules a verdict that rests on arms', () => {
    fc.assert(fc.property(fc.record({
      state: fc.constantFrom(...DEVIATION_STATES), word: fc.constantFrom(...ANALYSIS_VERDICTS),
      dependsOnArms: fc.constant(true), atDecisionPoint: fc.boolean(), blindBroken: fc.boolean(),
    }), facts => !settlementsAllowed(facts).includes('overrule')))
  })

  it('accepts no step where no registered method applies', () => {
    expect(settlementsAllowed({ ...fallback, word: 'no-registered-method' })).not.toContain('accept-step')
  })

  it.each(['awaiting-second', 'settled', 'memo-signed', 'amended'] as const)('offers nothing while %s', (state) => {
    expect(settlementsAllowed({ ...fallback, state })).toEqual([])
  })
})

describe('acknowledgementState', () => {
  const due = new Date('2026-06-22T09:14:00.000Z')
  it.each([
    [null, '2026-06-22T09:14:00.000Z', 'awaited'],
    [null, '2026-06-22T09:14:00.001Z', 'outstanding'],
    ['declined', '2026-07-01T00:00:00.000Z', 'declined'],
    ['acknowledged', '2026-07-01T00:00:00.000Z', 'acknowledged'],
  ] as const)('of answer %s at %s is %s', (decision, now, expected) => {
    expect(acknowledgementState(decision, due, new Date(now))).toBe(expected)
  })
})
