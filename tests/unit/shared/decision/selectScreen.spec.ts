import { describe, expect, it } from 'vitest'
import type { Plan } from '#shared/plan/schema'
import type { ExtractColumns } from '#shared/decision/columns'
import { contentHash } from '#shared/decision/contentHash'
import { indexExtract } from '#shared/decision/extractIndex'
import { judge } from '#shared/decision/judge'
import { actingScreens, queryKey, type Resolutions, screenExtract } from '#shared/decision/screen'
import { select } from '#shared/decision/select'
import { IDENTITY } from '../../../helpers/judgeTrial'
import { plainAnalysis, plainPlan } from '../../../helpers/plainPlan'

/** subject, parameter, visit, value, baseline, unit, in the set, flagged, how imputed */
type Line = [string, string, string, number, number, string, string, string, string?]

const plan: Plan = {
  ...plainPlan,
  endpoints: [{ ...plainPlan.endpoints[0]!, derivation: 'change' }, { ...plainPlan.endpoints[0]!, id: 'CRP', unit: 'mg/L' }],
  analyses: [{ ...plainAnalysis, recordSelection: { column: 'ANL01FL', value: 'Y' } }],
}
const [analysis] = plan.analyses

function columnsOf(lines: Line[]): ExtractColumns {
  const text = (index: number) => lines.map(line => String(line[index] ?? ''))
  return {
    rows: lines.length, sourceRow: lines.map((_, index) => index + 2), subject: text(0), parameter: text(1), visit: text(2),
    value: Float64Array.from(lines, line => line[3]), baseline: Float64Array.from(lines, line => line[4]),
    unit: text(5), site: null, imputed: text(8), arm: null, flags: { FASFL: text(6), ANL01FL: text(7) },
  }
}

const good = (subject: string, value = 40): Line => [subject, 'VAS', 'Week 8', value, 50, 'mm', 'Y', 'Y']
const lines: Line[] = [
  good('C'), good('A', 41), ['B', 'VAS', 'Week 8', 39, 50, 'mm', 'Y', 'Y', 'LOCF'],
  ['A', 'CRP', 'Week 8', 3, 4, 'mg/L', 'Y', 'Y'],
  ['A', 'VAS', 'Baseline', 50, 50, 'mm', 'Y', 'Y'],
  ['D', 'VAS', 'Week 8', 38, 50, 'mm', 'N', 'Y'],
  ['A', 'VAS', 'Week 8', 44, 50, 'mm', 'Y', ''],
  ['E', 'VAS', 'Week 8', Number.NaN, 50, 'mm', 'Y', 'Y'],
  ['F', 'VAS', 'Week 8', 37, Number.NaN, 'mm', 'Y', 'Y'],
  ['G', 'VAS', 'Baseline', 51, 51, 'mm', 'Y', 'Y'],
]

describe('select', () => {
  const selection = select(plan, analysis!, indexExtract(plan, columnsOf(lines)), false)

  it('says of every row whether it was kept or why it was dropped', () => {
    const { rows, kept, dropped, imputed } = selection.report
    expect({ rows, kept, imputed }).toEqual({ rows: 10, kept: 3, imputed: 1 })
    expect(Object.fromEntries(dropped.map(({ reason, count }) => [reason, count]))).toEqual({
      'other-parameter': 1, 'other-visit': 2, 'not-in-set': 1, 'not-flagged': 1, 'no-value': 1, 'no-baseline': 1,
    })
  })

  it('orders subjects by id, so that the order of rows changes nothing', () => {
    expect(selection.subjects).toEqual(['A', 'B', 'C'])
    expect([...selection.value]).toEqual([41, 39, 40])
    const turned = select(plan, analysis!, indexExtract(plan, columnsOf(lines.toReversed())), false)
    expect([turned.subjects, [...turned.value]]).toEqual([selection.subjects, [...selection.value]])
  })

  it('expects those seen at the visit at a look, and everybody in the set at the decision point', () => {
    expect(selection.expected).toEqual(['A', 'B', 'C', 'E', 'F'])
    expect(select(plan, analysis!, indexExtract(plan, columnsOf(lines)), true).expected).toEqual(['A', 'B', 'C', 'E', 'F', 'G'])
  })

  it('needs both occasions of a subject', () => {
    const occasions = { ...analysis!, comparison: { kind: 'occasions' as const, first: 'Baseline', second: 'Week 8' } }
    const { subjects, report, value, first } = select(plan, occasions, indexExtract(plan, columnsOf(lines)), false)
    expect([subjects, [...value], [...first!]]).toEqual([['A'], [41], [50]])
    expect(report.dropped).toContainEqual({ reason: 'other-occasion-missing', count: 3 })
    expect(report.kept).toBe(2)
  })

  it('takes a baseline of zero as missing where it divides', () => {
    const percent = { ...plan, endpoints: [{ ...plan.endpoints[0]!, derivation: 'percent-change' as const }] }
    const { report } = select(percent, analysis!, indexExtract(percent, columnsOf([['A', 'VAS', 'Week 8', 40, 0, 'mm', 'Y', 'Y']])), false)
    expect(report.dropped).toEqual([{ reason: 'zero-baseline', count: 1 }])
  })
})

describe('screens', () => {
  const found = (...extra: Line[]) => screenExtract(plan, columnsOf([...lines, ...extra])).map(({ kind, endpoint, rows, action }) => ({ kind, endpoint, rows, action }))

  it('act by themselves where the plan leaves a kind out', () => {
    expect(actingScreens(plan).map(({ id, action }) => [id, action])).toEqual([
      ['IMP', 'hold'], ['duplicate-key', 'hold'], ['implausible-value', 'warn'], ['wrong-unit', 'hold'], ['unknown-visit', 'hold'],
    ])
  })

  it('find nothing in sound rows', () => {
    expect(found()).toEqual([])
  })

  it.each<[string, Line, object]>([
    ['an impossible value', good('H', 101), { kind: 'impossible-value', rows: [12], action: 'hold' }],
    ['an impossible baseline', ['H', 'VAS', 'Week 8', 40, -1, 'mm', 'Y', 'Y'], { kind: 'impossible-value', rows: [12], action: 'hold' }],
    ['an implausible value', good('H', 97), { kind: 'implausible-value', rows: [12], action: 'warn' }],
    ['two values for one key', good('C', 12), { kind: 'duplicate-key', rows: [2, 12], action: 'hold' }],
    ['another unit', ['H', 'VAS', 'Week 8', 4, 5, 'cm', 'Y', 'Y'], { kind: 'wrong-unit', rows: [12], action: 'hold' }],
    ['no unit', ['H', 'VAS', 'Week 8', 40, 50, '', 'Y', 'Y'], { kind: 'wrong-unit', rows: [12], action: 'hold' }],
    ['a visit not in the plan', ['H', 'VAS', 'week 8', 40, 50, 'mm', 'Y', 'Y'], { kind: 'unknown-visit', rows: [12], action: 'hold' }],
  ])('find %s', (_, line, expected) => {
    expect(found(line)).toContainEqual({ endpoint: 'VAS', ...expected })
  })

  it('count a second value that is not flagged, or without a unit that has no value, as nothing', () => {
    expect(found(['C', 'VAS', 'Week 8', 12, 50, 'mm', 'Y', ''], ['H', 'VAS', 'Week 8', Number.NaN, 50, '', 'Y', 'Y'])).toEqual([])
  })

  const reasonWith = (extra: Line[], queries: Resolutions = {}, over: Partial<Plan> = {}) => {
    const report = judge({ plan: { ...plan, ...over }, columns: columnsOf([...lines, ...extra]), extract: { ...IDENTITY, purpose: 'interim' }, allocation: null, queries })
    return [report.analyses[0]!.verdict.reason, ...report.screens.map(({ query }) => query)]
  }

  it('hold what they touch until their query is cleared or overruled', () => {
    const impossible = good('H', 101)
    expect(reasonWith([impossible])).toEqual(['data-query-open', 'open', null])
    const key = queryKey('IMP', 'VAS')
    expect(reasonWith([impossible], { [key]: 'cleared' })).toEqual(['allocation-withheld', 'cleared', null])
    expect(reasonWith([impossible], { [key]: 'overruled' })).toEqual(['allocation-withheld', 'overruled', null])
    expect(reasonWith([impossible], { [queryKey('IMP', 'CRP')]: 'cleared' })[0]).toBe('data-query-open')
  })

  it('keep holding for two values under one key, whatever is resolved', () => {
    expect(reasonWith([good('C', 12)], { [queryKey('duplicate-key', 'VAS')]: 'overruled' })).toEqual(['data-query-open', 'open'])
  })

  it('touch no analysis of another set, visit, endpoint or record selection', () => {
    const apart: Line[] = [
      ['H', 'VAS', 'Week 8', 101, 50, 'mm', 'N', 'Y'], ['H', 'VAS', 'Baseline', 101, 50, 'mm', 'Y', 'Y'],
      ['H', 'CRP', 'Week 8', 101, 50, 'mg/L', 'Y', 'Y'], ['H', 'VAS', 'Week 8', 101, 50, 'mm', 'Y', ''],
    ]
    for (const line of apart) expect(reasonWith([line]).slice(0, 2)).toEqual(['allocation-withheld', 'open'])
  })

  it('hold for an unknown visit of the set, as it may be a misspelt one', () => {
    expect(reasonWith([['H', 'VAS', 'week 8', 40, 50, 'mm', 'Y', 'Y']])[0]).toBe('data-query-open')
    expect(reasonWith([['H', 'VAS', 'week 8', 40, 50, 'mm', 'N', 'Y']])[0]).toBe('allocation-withheld')
  })
})

describe('contentHash', () => {
  const whole = columnsOf(lines)

  it('knows neither the order of rows nor arms', () => {
    expect(contentHash(columnsOf(lines.toReversed()))).toBe(contentHash(whole))
    expect(contentHash({ ...whole, arm: lines.map(() => 'HIGH') })).toBe(contentHash(whole))
    expect(contentHash({ ...whole, sourceRow: lines.map((_, index) => index + 9) })).toBe(contentHash(whole))
  })

  it('knows every value, flag and repetition', () => {
    const changed = [good('C', 40.5), ...lines.slice(1)]
    const blank = { ...whole, flags: { ...whole.flags, FASFL: whole.flags.FASFL!.with(0, '') } }
    const hashes = [whole, columnsOf(changed), columnsOf([...lines, lines[0]!]), blank].map(contentHash)
    expect(new Set(hashes).size).toBe(4)
  })
})
