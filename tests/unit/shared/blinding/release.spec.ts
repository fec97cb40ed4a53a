import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { release, type ReleaseState } from '#shared/blinding/release'
import type { AnalysisReport, Report, SeenAnalysis } from '#shared/decision/report'
import { judgeTrial } from '../../../helpers/judgeTrial'
import { trialPairs, type TrialPair } from '../../../helpers/randomTrial'

const RUNS = { seed: 4711, numRuns: 1000, unbiased: true, endOnFailure: true }
const COLLEAGUE = { cleared: false }
const CLEARED = { cleared: true }
const look = { standing: 'look', look: 'L1' } as const

// Mapped, not filtered: fast-check's `gen` hands a filter the same value for ever.
const blindedPairs = trialPairs.map((pair): TrialPair => ({ ...pair, trial: { ...pair.trial, plan: { ...pair.trial.plan, blinding: 'blinded' } } }))

const stateOf = ({ trial }: TrialPair, released: ReleaseState['released']): ReleaseState =>
  ({ openLabel: false, blindBroken: false, released, namesFailed: trial.plan.release.namesFailed, registeredInLedger: true })

function bothReports({ trial, otherAllocation }: TrialPair): [Report, Report] {
  const standing = trial.purpose === 'database-lock' ? { standing: 'decision-point', look: null } as const : look
  return [judgeTrial(trial, trial.allocation, standing), judgeTrial(trial, otherAllocation, standing)]
}

/** What a release may tell of an analysis, and nothing else. */
function told({ verdict, prerequisites, steps, armFreeVerdict }: AnalysisReport, named: boolean): unknown {
  const words = prerequisites.map(({ verdict: word }) => word)
  const own = steps.map(step => [step.triggered, step.outcome, step.prerequisites.map(({ verdict: word }) => word)])
  return named ? [verdict, armFreeVerdict, words, own] : [verdict, armFreeVerdict]
}

function numbersIn(node: unknown): number[] {
  if (typeof node === 'number') return [node]
  return typeof node === 'object' && node !== null ? Object.values(node).flatMap(numbersIn) : []
}

describe('release to someone not cleared while the blind holds', { timeout: 90_000 }, () => {
  it('is the same to the byte under any two allocations before a release', () => {
    fc.assert(fc.property(blindedPairs, (pair) => {
      const [one, other] = bothReports(pair)
      const state = stateOf(pair, 'none')
      expect(JSON.stringify(release(one, COLLEAGUE, state))).toBe(JSON.stringify(release(other, COLLEAGUE, state)))
    }), RUNS)
  })

  it('after a release depends on nothing but what was released', () => {
    const alike = { told: 0 }
    fc.assert(fc.property(blindedPairs, (pair) => {
      const reports = bothReports(pair)
      const state = stateOf(pair, 'all')
      const [one, other] = reports.map(report => release(report, COLLEAGUE, state).analyses)
      reports[0].analyses.forEach((analysis, index) => {
        const [mine, theirs] = [told(analysis, state.namesFailed), told(reports[1].analyses[index]!, state.namesFailed)]
        if (JSON.stringify(mine) !== JSON.stringify(theirs)) return
        alike.told++
        expect(JSON.stringify(one![index])).toBe(JSON.stringify(other![index]))
      })
    }), RUNS)
    expect(alike.told).toBeGreaterThan(500)
  })

  it('carries no figure of anything that is formed with arms, released or not', () => {
    fc.assert(fc.property(blindedPairs, fc.constantFrom('none' as const, 'all' as const), (pair, released) => {
      const seen = release(bothReports(pair)[0], COLLEAGUE, stateOf(pair, released))
      expect(seen.allocation.hash).toBeNull()
      for (const analysis of seen.analyses.filter(each => each.dependsOnArms)) {
        const formed = [...analysis.prerequisites, ...analysis.steps.flatMap(step => step.prerequisites)].filter(each => each.dependsOnArms)
        expect(numbersIn([formed.map(each => [each.samples, each.figures]), analysis.byArm, analysis.plot])).toEqual([])
      }
      expect(JSON.stringify(seen)).not.toContain('armFreeVerdict')
    }), RUNS)
  })

  it('holds arm-dependent verdicts of re-cuts, unscheduled extracts and dummy lists whatever was released', () => {
    fc.assert(fc.property(blindedPairs, fc.constantFrom('re-cut' as const, 'unscheduled' as const, 'dummy' as const), (pair, way) => {
      const report = judgeTrial(pair.trial, pair.trial.allocation, way === 'dummy' ? look : { standing: way, look: null })
      const given = way === 'dummy' ? { ...report, allocation: { ...report.allocation, state: 'dummy' as const } } : report
      const before = release(given, COLLEAGUE, stateOf(pair, 'none'))
      expect(release(given, COLLEAGUE, stateOf(pair, 'all'))).toEqual(before)
    }), { ...RUNS, numRuns: 300 })
  })
})

const find = (report: Report, wanted: (analysis: AnalysisReport) => boolean) => report.analyses.find(wanted)

/** Random trials with their reports, made on first use. */
const gallery: { pair: TrialPair, report: Report }[] = []

/** The first of them with an analysis of the kind that a case is about. */
function sampleWith(wanted: (analysis: AnalysisReport) => boolean): { pair: TrialPair, report: Report, analysis: AnalysisReport } {
  if (gallery.length === 0) gallery.push(...fc.sample(blindedPairs, { seed: 99, numRuns: 300 }).map(pair => ({ pair, report: bothReports(pair)[0] })))
  for (const { pair, report } of gallery) {
    const analysis = find(report, wanted)
    if (analysis !== undefined) return { pair, report, analysis }
  }
  throw new Error('no such trial among the samples')
}

const seenBy = (report: Report, viewer: { cleared: boolean }, state: ReleaseState, id: string): SeenAnalysis =>
  release(report, viewer, state).analyses.find(({ analysis }) => analysis === id)!

describe('release', () => {
  it('tells an arm-free cause at once and counts it as released', () => {
    const { pair, report, analysis } = sampleWith(each => each.dependsOnArms && each.armFreeVerdict?.reason === 'too-many-missing')
    const seen = seenBy(report, COLLEAGUE, stateOf(pair, 'none'), analysis.analysis)
    expect(seen).toMatchObject({ verdict: { word: 'not-assessable', reason: 'too-many-missing' }, released: true })
  })

  it('holds an arm-dependent verdict and then tells its word and step', () => {
    const { pair, report, analysis } = sampleWith(each => each.dependsOnArms && each.armFreeVerdict === null && each.verdict.word === 'fallback-applies')
    const held = seenBy(report, COLLEAGUE, stateOf(pair, 'none'), analysis.analysis)
    expect(held).toMatchObject({ verdict: { word: 'held-behind-the-blind', step: null, reason: null }, released: false })
    expect(held.steps.every(step => step.triggered === null && step.outcome === 'held' && step.prerequisites.length === 0)).toBe(true)
    const state = { ...stateOf(pair, new Set([analysis.analysis])), namesFailed: false }
    const seen = seenBy(report, COLLEAGUE, state, analysis.analysis)
    expect(seen).toMatchObject({ verdict: analysis.verdict, released: true })
    expect(seen.steps.filter(step => step.outcome !== 'held').map(step => [step.step, step.outcome])).toEqual([[analysis.verdict.step, 'applies']])
    expect(seen.prerequisites.filter(each => each.dependsOnArms).every(each => each.verdict === 'held')).toBe(true)
  })

  it('names the failed prerequisites after a release only if the plan says so', () => {
    const { pair, report, analysis } = sampleWith(each => each.dependsOnArms && each.armFreeVerdict === null && each.verdict.word === 'fallback-applies')
    const seen = seenBy(report, COLLEAGUE, { ...stateOf(pair, 'all'), namesFailed: true }, analysis.analysis)
    expect(seen.prerequisites.map(({ verdict }) => verdict)).toEqual(analysis.prerequisites.map(({ verdict }) => verdict))
    expect(seen.steps.map(({ outcome }) => outcome)).toEqual(analysis.steps.map(({ outcome }) => outcome))
  })

  it('shows a cleared member the whole report and says whether the others may be told', () => {
    const { pair, report, analysis } = sampleWith(each => each.dependsOnArms && each.armFreeVerdict === null && each.byArm !== null && each.plot !== null)
    const seen = release(report, CLEARED, stateOf(pair, 'none'))
    expect(seen).toMatchObject({ view: 'whole', allocation: report.allocation })
    expect(seenBy(report, CLEARED, stateOf(pair, 'none'), analysis.analysis)).toMatchObject({ byArm: analysis.byArm, plot: analysis.plot, released: false })
    expect(seenBy(report, CLEARED, stateOf(pair, 'all'), analysis.analysis).released).toBe(true)
  })

  it('shows everything to everybody once the blind is broken, and in open-label studies', () => {
    const { pair, report } = sampleWith(each => each.dependsOnArms && each.byArm !== null)
    for (const open of [{ blindBroken: true }, { openLabel: true }]) {
      const seen = release(report, COLLEAGUE, { ...stateOf(pair, 'none'), ...open })
      expect(seen.view).toBe('whole')
      expect(seen.analyses.map(({ byArm }) => byArm)).toEqual(report.analyses.map(({ byArm }) => byArm))
      expect(seen.analyses.every(({ released }) => released)).toBe(true)
    }
  })
})
