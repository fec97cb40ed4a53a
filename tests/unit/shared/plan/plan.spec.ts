import { describe, expect, it } from 'vitest'
import { analysisDependsOnArms, dependsOnArms } from '#shared/plan/armDependence'
import { dayNumber, lookWindow } from '#shared/plan/calendar'
import { changesQuestion, needsReviewer, stepsThatChange } from '#shared/plan/changesQuestion'
import { completeness } from '#shared/plan/completeness'
import { consistency } from '#shared/plan/consistency'
import { fallbacksFor, measureOf, METHODS } from '#shared/plan/methods'
import { parsePlan } from '#shared/plan/parsePlan'
import { planBytes, planHash } from '#shared/plan/planHash'
import { prefill } from '#shared/plan/prefill'
import type { Requirement } from '#shared/plan/prerequisiteSchema'
import { FALLBACK_METHODS, PLANNED_METHODS } from '#shared/plan/terms'
import { asSwitch, normality, perArm, plainAnalysis, plainPlan, planWith, spread } from '../../../helpers/plainPlan'

describe('parsePlan', () => {
  it('reads a plan document back', () => {
    expect(parsePlan(JSON.parse(JSON.stringify(plainPlan)))).toEqual({ ok: true, plan: plainPlan })
  })

  it.each<[string, unknown, string, string]>([
    ['nothing', undefined, '', 'required'],
    ['a text', 'plan', '', 'wrong-type'],
    ['an unknown field', { ...plainPlan, colour: 'red' }, '/colour', 'unknown-field'],
    ['a repeated arm', { ...plainPlan, arms: [plainPlan.arms[0], plainPlan.arms[0]] }, '/arms/1/id', 'id-repeated'],
    ['an impossible date', { ...plainPlan, looks: [{ ...plainPlan.looks[0], cutOff: '2026-02-29' }] }, '/looks/0/cutOff', 'not-a-date'],
    ['a location shift', planWith({ summaryMeasure: 'location-shift' as 'difference-of-means' }), '/analyses/0/summaryMeasure', 'not-in-list'],
    ['another format', { ...plainPlan, format: 'stipule-plan/2' }, '/format', 'not-in-list'],
    ['a prerequisite without limit', planWith({ prerequisites: [{ ...asSwitch(spread), limits: { size: null, significance: null, broken: 'both' } } as ReturnType<typeof asSwitch>] }), '/analyses/0/prerequisites/0/limits/size', 'no-limit'],
  ])('names the place of %s', (_, document, pointer, code) => {
    const parsed = parsePlan(document)
    expect(parsed.ok ? [] : parsed.issues).toContainEqual(expect.objectContaining({ pointer, code }))
  })

  it('looks across parts once the shape is right', () => {
    const parsed = parsePlan(planWith({ endpoint: 'NOPE' }))
    expect(parsed).toEqual({ ok: false, issues: [{ pointer: '/analyses/0/endpoint', code: 'unknown-endpoint', params: { id: 'NOPE' } }] })
  })
})

describe('planHash', () => {
  it('does not depend on the order of members', () => {
    const turned = Object.fromEntries(Object.entries(plainPlan).toReversed()) as typeof plainPlan
    expect(planHash(turned)).toBe(planHash(plainPlan))
    expect(new TextDecoder().decode(planBytes(plainPlan))).toMatch(/^\{"acknowledger":/)
  })

  it('changes with any limit', () => {
    expect(planHash(planWith({ alpha: 0.049 }))).not.toBe(planHash(plainPlan))
  })
})

describe('completeness', () => {
  it('says where every combination of failures leads', () => {
    expect(completeness(plainAnalysis)).toEqual({
      switches: ['normality', 'spread'],
      rows: [
        { failed: ['normality'], steps: ['LOG'], first: 'LOG' },
        { failed: ['spread'], steps: ['WELCH'], first: 'WELCH' },
        { failed: ['normality', 'spread'], steps: ['LOG'], first: 'LOG' },
      ],
      remarks: [],
    })
  })

  it('says that nothing applies where no step is triggered', () => {
    const rows = completeness({ ...plainAnalysis, fallbacks: plainAnalysis.fallbacks.slice(0, 1) }).rows
    expect(rows.map(({ first }) => first)).toEqual([null, 'WELCH', null])
  })

  it('finds a step behind one that always takes over, and one that asks for what failed', () => {
    const [welch] = plainAnalysis.fallbacks
    const taker = { ...welch!, id: 'ANY', trigger: { kind: 'any' as const }, prerequisites: [] }
    const asking = { ...welch!, id: 'ASKS', prerequisites: [spread] }
    expect(completeness({ ...plainAnalysis, fallbacks: [taker, asking] }).remarks).toEqual([
      { pointer: '/fallbacks/1', code: 'unreachable-step', params: { step: 'ASKS' } },
      { pointer: '/fallbacks/1/prerequisites/0', code: 'contradicted-step', params: { step: 'ASKS', prerequisite: 'spread' } },
    ])
  })

  it('does not call a step on logarithms contradicted: it judges other values', () => {
    expect(completeness(plainAnalysis).remarks).toEqual([])
  })
})

describe('a step that changes the question', () => {
  it('is one that estimates something else', () => {
    const [welch, log] = plainAnalysis.fallbacks
    expect([changesQuestion(plainAnalysis, welch!), changesQuestion(plainAnalysis, log!)]).toEqual([false, true])
    expect(stepsThatChange(plainPlan)).toEqual([{ analysis: 'PAIN', step: 'LOG' }])
    expect(needsReviewer(plainPlan)).toBe(true)
    expect(needsReviewer(planWith({ fallbacks: [welch!] }))).toBe(false)
  })
})

describe('dependence on arms', () => {
  const two = plainAnalysis
  const all = { ...two, comparison: { ...two.comparison, arms: ['HIGH', 'LOW', 'PBO'] } } as typeof two
  const within = { ...two, comparison: { kind: 'occasions' as const, first: 'Baseline', second: 'Week 8' } }
  const count = (scope: 'per-arm' | 'in-all'): Requirement => ({ ...perArm, scope } as Requirement)
  const gone = (scope: 'compared-arms' | 'all-arms'): Requirement => ({ id: 'm', kind: 'missing-values', scope, most: 0.1 })
  const positive: Requirement = { id: 'p', kind: 'positive-values' }
  it.each<[string, Requirement, boolean, boolean]>([
    ['residuals', normality, true, true],
    ['spread', spread, true, true],
    ['count per arm', count('per-arm'), true, true],
    ['count in all', count('in-all'), false, false],
    ['missing in compared arms', gone('compared-arms'), true, false],
    ['missing in all arms', gone('all-arms'), false, false],
    ['positive values', positive, true, false],
  ])('%s: of two arms out of three %s, of all three %s', (_, requirement, ofTwo, ofAll) => {
    expect(dependsOnArms(plainPlan, two, requirement)).toBe(ofTwo)
    expect(dependsOnArms(plainPlan, all, requirement)).toBe(ofAll)
    expect(dependsOnArms(plainPlan, within, requirement)).toBe(false)
  })

  it('counts prerequisites that are reported only, and those of steps', () => {
    const reported = { ...two, prerequisites: [{ ...normality, onFailure: 'reported-only' as const }], fallbacks: [] }
    expect(analysisDependsOnArms(plainPlan, reported)).toBe(true)
    expect(analysisDependsOnArms(plainPlan, { ...two, prerequisites: [], fallbacks: two.fallbacks.slice(0, 1) })).toBe(true)
    expect(analysisDependsOnArms(plainPlan, { ...two, prerequisites: [], fallbacks: [] })).toBe(false)
  })
})

describe('the catalogue of methods', () => {
  it('offers only steps that fit, each with one measure', () => {
    expect(fallbacksFor(plainAnalysis, FALLBACK_METHODS)).toEqual(['welch-t', 'welch-anova', 'planned-after-log', 'mann-whitney', 'kruskal-wallis'])
    expect(measureOf('mann-whitney', 'two-sample-t', 'arms')).toBe('probability-of-larger')
    expect(measureOf('kruskal-wallis', 'one-way-anova', 'arms')).toBe('probability-of-larger-than-all')
    expect(measureOf('planned-after-log', 'paired-t', 'occasions')).toBe('geometric-mean-of-ratios')
    expect(measureOf('welch-t', 'paired-t', 'occasions')).toBeNull()
  })

  it.each(PLANNED_METHODS)('prefills %s with prerequisites that are consistent', (method) => {
    const kind = Object.keys(METHODS[method].measures)[0] as 'arms' | 'occasions' | 'constant'
    const comparison = kind === 'arms' ? plainAnalysis.comparison : kind === 'occasions' ? { kind, first: 'Baseline', second: 'Week 8' } : { kind, visit: 'Week 8' }
    for (const style of ['pretest', 'reported-only'] as const) {
      const prerequisites = prefill(method, style)
      const plan = planWith({ comparison, method, summaryMeasure: measureOf(method, method, kind)!, prerequisites, fallbacks: [], notAssessableLeadsTo: null })
      expect(consistency(plan)).toEqual([])
      expect(prerequisites.every(({ onFailure }) => onFailure === 'reported-only')).toBe(style === 'reported-only')
    }
  })
})

describe('the calendar', () => {
  // Checked against Python 3.11: (date(2000, 2, 29) - date(1970, 1, 1)).days.
  it.each([['1970-01-01', 0], ['2000-02-29', 11_016], ['2026-12-01', 20_788]])('%s is day %i', (date, day) => {
    expect(dayNumber(date)).toBe(day)
  })

  it('counts the days of four centuries', () => {
    expect(dayNumber('2370-01-01') - dayNumber('1970-01-01')).toBe(146_097)
  })

  it('opens a window around a planned cut-off', () => {
    const [look] = plainPlan.looks
    expect(lookWindow(look!)).toEqual({ first: dayNumber('2026-02-24'), last: dayNumber('2026-03-08') })
  })
})
