import { createReadStream } from 'node:fs'
import { readFile } from 'node:fs/promises'
import { describe, expect, it } from 'vitest'
import { release } from '#shared/blinding/release'
import type { ExtractColumns } from '#shared/decision/columns'
import { contentHash } from '#shared/decision/contentHash'
import { judge } from '#shared/decision/judge'
import type { Figure, PrerequisiteReport, Report } from '#shared/decision/report'
import { consistency } from '#shared/plan/consistency'
import type { Plan } from '#shared/plan/schema'
import { plannedArms, readAllocation } from '../../server/readers/allocationList'
import { proposeMapping, readCsvExtract, readHead } from '../../server/readers/extractFile'
import reference from './fixtures/decision.json'
import { insectPlan, plantPlan, sleepPlan } from './openPlans'

// The whole path over open data: file, columns, selection, screens, rule, report. R 4.2.2 says what the figures
// should be (scripts/reference/decision.R); the verdicts follow from them and the limits of openPlans.ts.

const fileOf = (name: string) => new URL(`./data/${name}`, import.meta.url)

async function read(plan: Plan, name: string): Promise<ExtractColumns> {
  const head = await readHead(await readFile(fileOf(name)), true)
  const { complete } = proposeMapping(plan, head!, null)
  const { columns, findings } = await readCsvExtract(createReadStream(fileOf(name)), plan, complete!)
  expect(findings.list).toEqual([])
  return columns!
}

async function reportOf(plan: Plan, name: string, list: string | null = null): Promise<Report> {
  expect(consistency(plan)).toEqual([])
  const columns = await read(plan, name)
  const subjects = list === null ? null : plannedArms((await readAllocation(createReadStream(fileOf(list)), plan, ['USUBJID'])).subjects)
  return judge({
    plan, columns, queries: {}, allocation: subjects === null ? null : { state: 'true', hash: null, subjects },
    extract: { bytesHash: '00'.repeat(32), contentHash: contentHash(columns), cutOff: null, purpose: 'interim', look: null, standing: 'outside-ledger' },
  })
}

const find = (report: Report, id: string) => report.analyses.find(({ analysis }) => analysis === id)!
const prerequisite = (list: readonly PrerequisiteReport[], id: string) => list.find(each => each.prerequisite === id)!
const figure = (list: readonly Figure[], measure: string) => list.find(each => each.measure === measure)!

interface Shape { n: number, skewness: number, low: number, high: number, kurtosis: number, w: number, p: number }
function expectShape({ n, figures }: { readonly n: number, readonly figures: readonly Figure[] }, expected: Shape): void {
  expect(n).toBe(expected.n)
  const skewness = figure(figures, 'skewness')
  expect(skewness.value).toBeWithinRelative(expected.skewness, 1e-10)
  expect(skewness.lower).toBeWithinRelative(expected.low, 1e-10)
  expect(skewness.upper).toBeWithinRelative(expected.high, 1e-10)
  expect(figure(figures, 'excess-kurtosis').value).toBeWithinRelative(expected.kurtosis, 1e-10)
  const test = figure(figures, 'shapiro-wilk')
  expect(test.value).toBeWithinRelative(expected.w, 1e-10)
  expect(test.pValue).toBeWithinRelative(expected.p, 1e-10)
}

function expectSpread({ figures }: PrerequisiteReport, expected: { ratio: number, f: number, df1: number, df2: number, p: number, low?: number, high?: number }): void {
  const ratio = figure(figures, 'sd-ratio')
  expect(ratio.value).toBeWithinRelative(expected.ratio, 1e-10)
  if (expected.low !== undefined && expected.high !== undefined) {
    // The largest over the smallest SD is never below 1, so its lower limit is not either.
    expect(ratio.lower).toBeWithinRelative(Math.max(1, expected.low), 1e-10)
    expect(ratio.upper).toBeWithinRelative(expected.high, 1e-10)
  }
  const test = figure(figures, 'brown-forsythe')
  expect(test).toMatchObject({ df1: expected.df1, df2: expected.df2 })
  expect(test.value).toBeWithinRelative(expected.f, 1e-10)
  expect(test.pValue).toBeWithinRelative(expected.p, 1e-10)
}

describe('extra sleep, two drugs within subject', async () => {
  const report = await reportOf(sleepPlan, 'sleep.csv')

  it('has R’s figures of the differences', () => {
    for (const id of ['LEVEL', 'BOTH']) expectShape(prerequisite(find(report, id).prerequisites, 'normality').samples[0]!, reference.sleep.differences)
  })

  it('switches to signed ranks by a level alone: p = .033, differences not clearly skewed', () => {
    expect(find(report, 'LEVEL').verdict).toMatchObject({ word: 'fallback-applies', step: 'SIGNED-RANK', changesQuestion: true })
  })

  it('stands where the size must break as well: G1 from .40 to 3.09 is not clearly beyond 1', () => {
    expect(find(report, 'BOTH')).toMatchObject({ verdict: { word: 'planned-method-stands' }, dependsOnArms: false, byArm: null })
  })
})

describe('plant growth, three arms open to all', async () => {
  const report = await reportOf(plantPlan, 'plant-growth.csv')
  const all = find(report, 'ALL')
  const pair = find(report, 'PAIR')

  it('has R’s figures of residuals, arms and spread', () => {
    const { residuals, byOwnSd, spread, withinArms } = reference.plantGrowth
    expectShape(prerequisite(all.prerequisites, 'plain-residuals').samples[0]!, residuals)
    expectShape(prerequisite(all.prerequisites, 'normality').samples[0]!, byOwnSd)
    expectSpread(prerequisite(all.prerequisites, 'spread'), spread)
    const arms = prerequisite(all.prerequisites, 'within').samples
    expect(arms.map(({ arm }) => arm)).toEqual(Object.keys(withinArms))
    Object.values(withinArms).forEach((expected, index) => expectShape(arms[index]!, expected))
  })

  it('has the limits of the ratio of two SDs', () => {
    expectShape(prerequisite(pair.prerequisites, 'normality').samples[0]!, reference.plantGrowth.pairByOwnSd)
    expectSpread(prerequisite(pair.prerequisites, 'spread'), reference.plantGrowth.pairSpread)
  })

  it('lets the ANOVA stand, and Welch take over where a ratio of 1.79 breaks a limit of 1.5', () => {
    expect(all.verdict.word).toBe('planned-method-stands')
    expect(pair.verdict).toMatchObject({ word: 'fallback-applies', step: 'WELCH', changesQuestion: false })
  })
})

describe('insect sprays, six arms behind the blind', async () => {
  const report = await reportOf(insectPlan, 'insect-sprays.csv', 'insect-sprays-list.csv')
  const shifted = find(report, 'SHIFTED')

  it('has R’s figures before and after the logarithm', () => {
    const { residuals, spread, loggedResiduals, loggedSpread } = reference.insectSprays
    expectShape(prerequisite(shifted.prerequisites, 'normality').samples[0]!, residuals)
    expectSpread(prerequisite(shifted.prerequisites, 'spread'), spread)
    const step = shifted.steps.find(({ step: id }) => id === 'LOG')!
    expectShape(prerequisite(step.prerequisites, 'normality').samples[0]!, loggedResiduals)
    expectSpread(prerequisite(step.prerequisites, 'spread'), loggedSpread)
  })

  it('has R’s figures of the proxy that knows no arms', () => {
    expectShape(shifted.proxy!, reference.insectSprays.aboutMedian)
  })

  it('moves to logarithms of counts plus one, and to nothing where zeros have no logarithm', () => {
    expect(shifted.verdict).toMatchObject({ word: 'fallback-applies', step: 'LOG', changesQuestion: true })
    const unshifted = find(report, 'UNSHIFTED')
    expect(unshifted.verdict).toMatchObject({ word: 'no-registered-method', step: null })
    expect(unshifted.steps.map(({ step, outcome }) => [step, outcome])).toEqual([['WELCH', 'not-triggered'], ['LOG', 'prerequisite-not-met'], ['RANKS', 'prerequisite-not-met']])
    expect(prerequisite(unshifted.steps[1]!.prerequisites, 'positive').samples[0]!.figures).toMatchObject([{ measure: 'not-positive', value: 2, broken: true }])
  })

  it('holds all of it from a member who is not cleared', async () => {
    const state = { openLabel: false, blindBroken: false, released: 'none', namesFailed: false, registeredInLedger: true } as const
    const words = (given: Report) => release(given, { cleared: false }, state).analyses.map(({ verdict }) => [verdict.word, verdict.reason])
    expect(words(report)).toEqual([['held-behind-the-blind', null], ['held-behind-the-blind', null]])
    expect(words(await reportOf(insectPlan, 'insect-sprays.csv'))).toEqual([['not-assessable', 'allocation-withheld'], ['not-assessable', 'allocation-withheld']])
  })
})
