import { describe, expect, it } from 'vitest'
import type { Comparison, Fallback, PlannedAnalysis } from '#shared/plan/analysisSchema'
import { consistency } from '#shared/plan/consistency'
import type { Plan } from '#shared/plan/schema'
import { asSwitch, missing, normality, perArm, plainAnalysis, plainPlan, planWith, spread } from '../../../helpers/plainPlan'

const codes = (plan: Plan) => consistency(plan).map(({ pointer, code }) => `${pointer} ${code}`)

const arms = plainAnalysis.comparison as Extract<Comparison, { kind: 'arms' }>
const [welch, log] = plainAnalysis.fallbacks as [Fallback, Fallback]
const endpoint = plainPlan.endpoints[0]!
const [high, low, placebo] = plainPlan.arms as [Plan['arms'][0], Plan['arms'][0], Plan['arms'][0]]
const [first, second] = plainPlan.looks as [Plan['looks'][0], Plan['looks'][0]]
const with0 = (prerequisite: PlannedAnalysis['prerequisites'][number]) => planWith({ prerequisites: [prerequisite, ...plainAnalysis.prerequisites.slice(1)], fallbacks: [], notAssessableLeadsTo: null })
const step = (change: Partial<Fallback>) => planWith({ fallbacks: [{ ...welch, ...change }] })
const logStep = (change: Partial<Fallback>) => planWith({ fallbacks: [welch, { ...log, ...change }] })

it('finds nothing wrong with a sound plan', () => {
  expect(codes(plainPlan)).toEqual([])
})

describe('the study', () => {
  it.each<[string, Partial<Plan>]>([
    ['/arms/1/label arms-alike', { arms: [high, { ...low, label: 'HIGH  dose' }, placebo] }],
    ['/arms/1/id arms-alike', { arms: [high, { ...low, id: 'high' }, placebo] }],
    ['/blinding blinded-needs-two-arms', { arms: [high] }],
    ['/endpoints/0/plausible/max plausible-outside-possible', { endpoints: [{ ...endpoint, plausible: { min: null, max: 101 } }] }],
    ['/endpoints/0/plausible/min plausible-outside-possible', { endpoints: [{ ...endpoint, plausible: { min: -1, max: null } }] }],
    ['/looks/1/cutOff looks-not-ordered', { looks: [second, { ...first, expectedSubjects: 90 }] }],
    ['/looks/1/daysBefore looks-overlap', { looks: [first, { ...second, cutOff: '2026-03-13' }] }],
    ['/looks/1/expectedSubjects expected-decreases', { looks: [first, { ...second, expectedSubjects: 39 }] }],
    ['/decisionPoint/expectedSubjects expected-decreases', { decisionPoint: { name: 'Lock', expectedSubjects: 79 } }],
    ['/screens/1/kind screen-repeated', { screens: [...plainPlan.screens, { id: 'TWICE', kind: 'impossible-value', action: 'warn' }] }],
    ['/screens/0/action duplicate-key-must-hold', { screens: [{ id: 'DUP', kind: 'duplicate-key', action: 'warn' }] }],
    ['/screens/0/id screen-id-reserved', { screens: [{ id: 'wrong-unit', kind: 'impossible-value', action: 'hold' }] }],
  ])('%s', (expected, change) => {
    expect(codes({ ...plainPlan, ...change })).toContain(expected)
  })

  it('lets windows touch without overlapping', () => {
    expect(codes({ ...plainPlan, looks: [first, { ...second, cutOff: '2026-03-14' }] })).toEqual([])
  })
})

describe('a planned analysis', () => {
  const occasions = { kind: 'occasions', first: 'Baseline', second: 'Week 8' } as const
  it.each<[string, Partial<PlannedAnalysis>]>([
    ['endpoint unknown-endpoint', { endpoint: 'NOPE' }],
    ['analysisSet unknown-set', { analysisSet: 'NOPE' }],
    ['comparison/arms/1 unknown-arm', { comparison: { ...arms, arms: ['HIGH', 'NOPE'], control: null } }],
    ['comparison/arms/1 arm-repeated', { comparison: { ...arms, arms: ['HIGH', 'HIGH'], control: null } }],
    ['comparison/visit unknown-visit', { comparison: { ...arms, visit: 'Week 9' } }],
    ['comparison/contrast contrast-needs-two-arms', { comparison: { ...arms, arms: ['HIGH', 'LOW', 'PBO'] } }],
    ['comparison/control control-not-compared', { comparison: { ...arms, control: 'LOW' } }],
    ['comparison/control control-missing', { comparison: { ...arms, contrast: 'all-against-control', control: null } }],
    ['comparison/control control-not-wanted', { comparison: { ...arms, contrast: 'all-pairs' } }],
    ['comparison/adjustment adjustment-not-possible', { comparison: { ...arms, contrast: 'all-pairs', control: null, adjustment: 'dunnett' } }],
    ['comparison/second occasions-equal', { comparison: { ...occasions, first: 'Week 8' } }],
    ['method method-does-not-fit', { comparison: occasions }],
    ['method method-does-not-fit', { comparison: { ...arms, arms: ['HIGH', 'LOW', 'PBO'], contrast: 'all-pairs', control: null } }],
    ['method method-does-not-fit', { method: 'paired-t' }],
    ['summaryMeasure measure-not-possible', { summaryMeasure: 'probability-of-larger' }],
    ['direction direction-not-possible', { method: 'one-way-anova', summaryMeasure: 'differences-among-means', direction: 'greater', comparison: { ...arms, contrast: 'global', control: null } }],
    ['notAssessableLeadsTo unknown-step', { notAssessableLeadsTo: 'NOPE' }],
    ['prerequisites too-many-switches', { prerequisites: Array.from({ length: 9 }, (_, index) => ({ ...asSwitch(spread), id: `s${index}` })) }],
  ])('/analyses/0/%s', (expected, change) => {
    expect(codes(planWith(change))).toContain(`/analyses/0/${expected}`)
  })
})

describe('a prerequisite', () => {
  const shape = normality as Extract<typeof normality, { kind: 'normality' }>
  const equal = spread as Extract<typeof spread, { kind: 'equal-spread' }>
  it.each<[string, PlannedAnalysis['prerequisites'][number]]>([
    ['quantity quantity-not-possible', { ...shape, quantity: 'differences', onFailure: 'switch' }],
    ['kind kind-not-possible', { id: 'x', kind: 'symmetry', quantity: 'differences', limits: { size: { measure: 'skewness', limit: 1, reading: 'estimate' } }, minimum: 8, otherReading: shape.otherReading, onFailure: 'switch' }],
    ['minimum minimum-below-procedure', { ...shape, limits: { size: null, significance: { procedure: 'anderson-darling', level: 0.05 }, broken: 'either' }, minimum: 7, onFailure: 'switch' }],
    ['limits/size/limit limit-not-above-one', { ...equal, limits: { ...equal.limits, size: { measure: 'sd-ratio', limit: 1, reading: 'estimate' } }, onFailure: 'switch' }],
    ['multiplicity multiplicity-not-possible', { ...shape, multiplicity: 'holm', onFailure: 'switch' }],
    ['multiplicity multiplicity-not-possible', { ...shape, quantity: 'values-within-arms', limits: { ...shape.limits, significance: null }, multiplicity: 'holm', onFailure: 'switch' }],
    ['onFailure consequence-not-possible', { ...shape, onFailure: 'hold' }],
    ['onFailure consequence-not-possible', { ...perArm, onFailure: 'switch' }],
  ])('/analyses/0/prerequisites/0/%s', (expected, prerequisite) => {
    expect(codes(with0(prerequisite))).toContain(`/analyses/0/prerequisites/0/${expected}`)
  })

  it('reads a ratio of SDs of three arms by the estimate only', () => {
    const reading = (how: 'estimate' | 'upper-limit') => codes(planWith({
      method: 'one-way-anova', summaryMeasure: 'differences-among-means', fallbacks: [], notAssessableLeadsTo: null,
      comparison: { ...arms, arms: ['HIGH', 'LOW', 'PBO'], contrast: 'global', control: null },
      prerequisites: [{ ...equal, limits: { ...equal.limits, size: { measure: 'sd-ratio', limit: 2, reading: how } }, onFailure: 'switch' }],
    }))
    expect(reading('estimate')).toEqual([])
    expect(reading('upper-limit')).toEqual(['/analyses/0/prerequisites/0/limits/size/reading reading-needs-two-arms'])
  })

  it.each([{ ...perArm, onFailure: 'hold' }, { ...missing, scope: 'compared-arms' }] as const)('counts nothing by arm without arms: $kind', (prerequisite) => {
    const within = planWith({
      comparison: { kind: 'occasions', first: 'Baseline', second: 'Week 8' }, method: 'paired-t', summaryMeasure: 'mean-of-differences',
      prerequisites: [prerequisite], fallbacks: [], notAssessableLeadsTo: null,
    })
    expect(codes(within)).toEqual(['/analyses/0/prerequisites/0/scope scope-needs-arms'])
  })
})

describe('a step', () => {
  const at = '/analyses/0/fallbacks/0'
  it.each<[string, Partial<Fallback>]>([
    ['method method-does-not-fit', { method: 'wilcoxon-signed-rank' }],
    ['summaryMeasure measure-not-possible', { method: 'mann-whitney' }],
    ['summaryMeasure measure-not-possible', { method: 'kruskal-wallis', summaryMeasure: 'probability-of-larger' }],
    ['transformation transformation-missing', { method: 'planned-after-log', summaryMeasure: 'ratio-of-geometric-means' }],
    ['transformation transformation-not-wanted', { transformation: log.transformation }],
    ['trigger/of/0 unknown-prerequisite', { trigger: { kind: 'exactly', of: ['nope'] } }],
    ['trigger/of/0 trigger-not-switch', { trigger: { kind: 'exactly', of: ['missing'] } }],
    ['trigger/of/1 trigger-repeats', { trigger: { kind: 'exactly', of: ['spread', 'spread'] } }],
    ['prerequisites/0/quantity quantity-not-possible', { prerequisites: [{ ...normality, quantity: 'values' } as Fallback['prerequisites'][number]] }],
  ])(`${at}/%s`, (expected, change) => {
    expect(codes(step(change))).toContain(`${at}/${expected}`)
  })

  it('does not repeat the planned method', () => {
    expect(codes(planWith({ method: 'welch-t' }))).toContain(`${at}/method step-repeats-plan`)
  })

  it('is triggered by nothing when nothing switches', () => {
    const plan = planWith({ prerequisites: [missing], fallbacks: [{ ...welch, trigger: { kind: 'any' } }] })
    expect(codes(plan)).toEqual([`${at}/trigger nothing-switches`])
  })

  it('takes no logarithm of a percent change', () => {
    const plan = { ...plainPlan, endpoints: [{ ...endpoint, derivation: 'percent-change' as const }] }
    expect(codes(plan)).toEqual(['/analyses/0/fallbacks/1/transformation log-of-percent-change'])
  })

  it('checks that values are positive before their logarithm', () => {
    expect(codes(logStep({ prerequisites: [normality] }))).toEqual(['/analyses/0/fallbacks/1/prerequisites positive-values-missing'])
  })

  it('needs a constant whose logarithm exists', () => {
    const plan = planWith({
      comparison: { kind: 'constant', visit: 'Week 8' }, method: 'one-sample-t', summaryMeasure: 'mean-against-constant', nullValue: 0,
      prerequisites: [{ id: 'positive', kind: 'positive-values', onFailure: 'switch' }], notAssessableLeadsTo: null,
      fallbacks: [{ ...log, summaryMeasure: 'geometric-mean-against-constant', trigger: { kind: 'any' }, prerequisites: [{ id: 'positive', kind: 'positive-values' }] }],
    })
    expect(codes(plan)).toEqual(['/analyses/0/fallbacks/0/transformation/shift null-value-not-positive'])
  })
})
