import { describe, expect, it } from 'vitest'
import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import type { Requirement } from '#shared/plan/prerequisiteSchema'
import type { Plan } from '#shared/plan/schema'
import { checkReport } from '#shared/decision/checkReport'
import { compileRule, makeWorkspace } from '#shared/decision/compileRule'
import { breaksTwoSided, breaksUpwards, BREAKS, bothBreak, anyBreaks, KEEPS, readingAt, UNTOLD } from '#shared/decision/checks/limits'
import type { PrerequisiteReport } from '#shared/decision/report'
import type { RuleSample } from '#shared/decision/rule'
import { checkAt, judgeCheck } from '#shared/decision/walk'
import { shapiroWilk } from '#shared/statistics/normality/shapiroWilk'
import { normality, perArm, plainAnalysis, plainPlan, spread } from '../../../helpers/plainPlan'

const ARMS = ['HIGH', 'LOW', 'PBO']

interface Given extends Partial<RuleSample> { comparison?: PlannedAnalysis['comparison'], derivation?: Plan['endpoints'][number]['derivation'] }

/** One prerequisite on values by arm (or one sample), judged as the rule judges it. */
function judged(requirement: Requirement, groups: readonly (readonly number[])[], { comparison, derivation = 'none', ...over }: Given = {}): PrerequisiteReport {
  const arms = ARMS.slice(0, groups.length)
  const between = { ...plainAnalysis.comparison, arms } as PlannedAnalysis['comparison']
  const analysis = { ...plainAnalysis, comparison: comparison ?? between, prerequisites: [{ ...requirement, onFailure: 'switch' as const }], fallbacks: [], notAssessableLeadsTo: null }
  const plan = { ...plainPlan, endpoints: [{ ...plainPlan.endpoints[0]!, derivation }], analyses: [analysis] }
  const offsets = Uint32Array.from([0, ...groups.map((_, index) => groups.slice(0, index + 1).flat().length)])
  const n = groups.flat().length
  const sample: RuleSample = {
    offsets, value: Float64Array.from(groups.flat()), baseline: null, first: null, firstBaseline: null, usable: n, expected: n, expectedCompared: n,
    subjectsExpected: 40, arms: 'known', queryOpen: false, setUndetermined: false, decisionPoint: false, ...over,
  }
  const rule = compileRule(plan, analysis)
  const workspace = makeWorkspace(rule, n)
  return checkReport(checkAt(rule, 0), judgeCheck(0, rule, sample, workspace), 'switch', arms, workspace, true)
}

const range = (n: number, f: (i: number) => number) => Array.from({ length: n }, (_, index) => f(index))
const even = (n: number) => range(n, i => i)
const skewed = (n: number) => range(n, i => 1.3 ** i)
const bySize = (limit: number, reading: 'estimate' | 'lower-limit' | 'upper-limit' | 'by-n') => ({ size: { measure: 'skewness' as const, limit, reading }, significance: null, broken: 'either' as const })
const shape = (change: object): Requirement => ({ ...normality, ...change } as Requirement)

describe('limits', () => {
  it('are read by the lower confidence limit below 50 values', () => {
    expect([readingAt('by-n', 49), readingAt('by-n', 50), readingAt('upper-limit', 5)]).toEqual(['lower-limit', 'estimate', 'upper-limit'])
  })

  it.each([
    [1.2, 0.5, 1.9, 'estimate', BREAKS], [-1.2, -1.9, -0.5, 'estimate', BREAKS], [1, 0.5, 1.9, 'estimate', KEEPS],
    [1.5, 1.01, 2, 'lower-limit', BREAKS], [-1.5, -2, -1.01, 'lower-limit', BREAKS], [1.5, 0.9, 2.1, 'lower-limit', KEEPS],
    [0.2, -0.9, 1.1, 'upper-limit', BREAKS], [0.2, -1.1, 0.9, 'upper-limit', BREAKS], [0.2, -0.9, 0.9, 'upper-limit', KEEPS],
  ] as const)('on both sides of zero: %f in [%f, %f] by the %s', (estimate, lower, upper, reading, breach) => {
    expect(breaksTwoSided(estimate, lower, upper, 1, reading)).toBe(breach)
  })

  it('break upwards only beyond the limit, and tell nothing without a figure', () => {
    expect([breaksUpwards(1.6, 1.1, 2, 1.5, 'estimate'), breaksUpwards(1.6, 1.1, 2, 1.5, 'lower-limit'), breaksUpwards(1.4, 1.1, 2, 1.5, 'upper-limit')]).toEqual([BREAKS, KEEPS, BREAKS])
    expect(breaksUpwards(1.6, UNTOLD, UNTOLD, 1.5, 'upper-limit')).toBeNaN()
  })

  it('join by three-valued logic', () => {
    expect([anyBreaks(BREAKS, UNTOLD), anyBreaks(KEEPS, UNTOLD), bothBreak(KEEPS, UNTOLD), bothBreak(BREAKS, UNTOLD)]).toEqual([BREAKS, UNTOLD, KEEPS, UNTOLD])
  })
})

describe('normality', () => {
  it('within arms fails when one arm breaks, and says which', () => {
    const { verdict, samples } = judged(shape({ quantity: 'values-within-arms', limits: bySize(1, 'estimate') }), [even(20), skewed(20)])
    expect(verdict).toBe('not-met')
    expect(samples.map(({ arm, n, broken }) => [arm, n, broken])).toEqual([['HIGH', 20, false], ['LOW', 20, true]])
  })

  it('of residuals by own SD is not disturbed by arms of other location and spread', () => {
    const own = judged(shape({ limits: bySize(0.2, 'estimate') }), [even(20), even(20).map(x => 500 + 90 * x)])
    const pooled = judged(shape({ quantity: 'residuals', limits: bySize(0.2, 'estimate') }), [even(20).map(x => x / 100), skewed(20)])
    expect([own.verdict, own.samples[0]!.n, pooled.verdict]).toEqual(['met', 40, 'not-met'])
    expect(own.samples[0]!.figures[0]!.value).toBeCloseTo(0, 12)
  })

  it.each([
    ['too few values', { minimum: 21 }, [even(20)], 'too-few-data'],
    ['a constant sample', { quantity: 'values-within-arms' }, [even(20), range(20, () => 3.7)], 'procedure-undefined'],
    ['a constant arm among residuals by own SD', {}, [even(20), range(20, () => 0.1)], 'procedure-undefined'],
    ['an arm of one among residuals by own SD', {}, [even(20), [4]], 'too-few-data'],
    ['an empty arm among residuals', { quantity: 'residuals', limits: bySize(1, 'estimate') }, [even(20), []], 'too-few-data'],
  ])('is not assessable for %s', (_, change, groups, reason) => {
    const requirement = shape(change)
    const single = groups.length === 1
    const found = judged(single ? shape({ ...change, quantity: 'values' }) : requirement, groups, single ? { comparison: { kind: 'constant', visit: 'Week 8' } } : {})
    expect(found).toMatchObject({ verdict: 'not-assessable', reason })
  })

  it('says how many values there are where nothing else can be told', () => {
    expect(judged(normality, [even(20), range(20, () => 0.1)]).samples).toEqual([{ arm: null, n: 40, figures: [], broken: null }])
    expect(judged(shape({ quantity: 'values-within-arms', minimum: 30 }), [even(20), even(12)]).samples.map(({ n, figures }) => [n, figures])).toEqual([[20, []], [12, []]])
  })

  it('takes the registered other reading and keeps the reason', () => {
    const read = (tooFewData: 'met' | 'not-met') => judged(shape({ minimum: 60, otherReading: { tooFewData, procedureUndefined: null } }), [even(20), even(20)])
    expect(read('met')).toMatchObject({ verdict: 'met', reason: 'too-few-data' })
    expect(read('not-met')).toMatchObject({ verdict: 'not-met', reason: 'too-few-data' })
    expect(judged(shape({ minimum: 60, otherReading: { tooFewData: null, procedureUndefined: 'met' } }), [even(20), even(20)])).toMatchObject({ verdict: 'not-assessable', reason: 'too-few-data' })
  })

  it('counts an arm whose p is not known as one of the family', () => {
    const level = { size: null, significance: { procedure: 'shapiro-wilk', level: 0.05 }, broken: 'either' }
    const { samples } = judged(shape({ quantity: 'values-within-arms', limits: level, multiplicity: 'holm' }), [skewed(12), even(3), even(12)])
    const [first, , third] = samples.map(({ figures }) => figures.find(({ measure }) => measure === 'shapiro-wilk'))
    expect(first!.adjustedP! / shapiroWilk(skewed(12)).pValue).toBeCloseTo(3, 10)
    expect(third!.adjustedP! / shapiroWilk(even(12)).pValue).toBeCloseTo(Math.min(2, 1 / shapiroWilk(even(12)).pValue), 10)
  })

  it('keeps its verdict where one procedure is undefined and the other tells', () => {
    const large = range(5001, i => i)
    const joined = (limit: number, broken: 'both' | 'either') => judged(shape({ quantity: 'values', limits: { ...bySize(limit, 'estimate'), significance: { procedure: 'shapiro-wilk', level: 0.05 }, broken } }), [large], { comparison: { kind: 'constant', visit: 'Week 8' } })
    expect(joined(1, 'both')).toMatchObject({ verdict: 'met', reason: null })
    expect(joined(1, 'either')).toMatchObject({ verdict: 'not-assessable', reason: 'procedure-undefined' })
  })
})

describe('equal spread', () => {
  const ratio = (reading: 'by-n' | 'estimate', limit = 1.5) => ({ ...spread, limits: { size: { measure: 'sd-ratio', limit, reading }, significance: null, broken: 'either' } }) as Requirement

  it('reads by n of both arms together', () => {
    const wide = (n: number) => even(n).map(x => 1.7 * x)
    expect(judged(ratio('by-n'), [even(24), wide(25)]).verdict).toBe('met')
    expect(judged(ratio('by-n'), [even(25), wide(25)]).verdict).toBe('not-met')
  })

  it('needs the minimum in every arm, and a spread in every arm', () => {
    expect(judged(ratio('estimate'), [even(20), even(4)])).toMatchObject({ verdict: 'not-assessable', reason: 'too-few-data', samples: [{ n: 20 }, { n: 4 }] })
    expect(judged(ratio('estimate'), [even(20), range(20, () => 5)])).toMatchObject({ verdict: 'not-assessable', reason: 'procedure-undefined' })
  })
})

describe('subjects and values', () => {
  const positive: Requirement = { id: 'positive', kind: 'positive-values' }

  it('looks for values that are not positive wherever they enter', () => {
    const ones = Float64Array.from([1, 1])
    const place = (name: 'baseline' | 'first' | 'firstBaseline' | null) => judged(positive, [[1, 1]], {
      derivation: 'change', comparison: { kind: 'occasions', first: 'Baseline', second: 'Week 8' },
      baseline: ones, first: ones, firstBaseline: ones, ...name === null ? {} : { [name]: Float64Array.from([1, 0]) },
    })
    expect([place(null), place('baseline'), place('first'), place('firstBaseline')].map(({ verdict }) => verdict)).toEqual(['met', 'not-met', 'not-met', 'not-met'])
    expect(place('first').samples[0]).toMatchObject({ n: 2, figures: [{ measure: 'not-positive', value: 1, limit: 0, broken: true }] })
    expect(judged(positive, [[]], { comparison: { kind: 'constant', visit: 'Week 8' } })).toMatchObject({ verdict: 'not-assessable', reason: 'too-few-data' })
  })

  it('asks of each arm its share of the expected subjects, in whole subjects', () => {
    const share: Requirement = { ...perArm, least: { kind: 'share-of-expected', share: 0.3 } } as Requirement
    // HIGH : LOW : PBO = 2 : 1 : 1 of 40 subjects: 30 % of 20 and of 10.
    expect(judged(share, [even(6), even(3)])).toMatchObject({ verdict: 'met', samples: [{ figures: [{ limit: 6 }] }, { figures: [{ limit: 3 }] }] })
    expect(judged(share, [even(6), even(2)])).toMatchObject({ verdict: 'not-met', samples: [{ broken: false }, { broken: true }] })
  })

  it('takes a share that is a whole number up to rounding as that number', () => {
    const share: Requirement = { id: 'all', kind: 'count', scope: 'in-all', least: { kind: 'share-of-expected', share: 0.57 } }
    expect(judged(share, [even(30), even(27)], { subjectsExpected: 100 })).toMatchObject({ verdict: 'met', figures: [{ value: 57, limit: 57 }] })
  })

  it('compares the missing share with its limit inclusively, and has none of nobody', () => {
    const missing = (most: number): Requirement => ({ id: 'm', kind: 'missing-values', scope: 'all-arms', most })
    const given = { expected: 20, usable: 17 }
    expect([judged(missing(0.15), [even(17), []], given).verdict, judged(missing(0.149), [even(17), []], given).verdict]).toEqual(['met', 'not-met'])
    expect(judged(missing(0.5), [[], []], { expected: 0, usable: 0 })).toMatchObject({ verdict: 'not-assessable', reason: 'too-few-subjects' })
  })

  it('judges nothing formed with arms while arms are not known', () => {
    expect(judged(normality, [even(20), even(20)], { arms: 'partial' })).toMatchObject({ verdict: 'not-assessable', reason: 'allocation-withheld' })
  })
})
