import type { AnalysisReport, PrerequisiteReport, Report, SeenAnalysis, SeenPrerequisite, SeenReport, SeenStep, StepReport, VerdictReport } from '../decision/report'

export interface ReleaseViewer {
  /** Holds clearance for arms in this study now. */
  readonly cleared: boolean
}

export interface ReleaseState {
  readonly openLabel: boolean
  readonly blindBroken: boolean
  /** Planned analyses whose arm-dependent verdicts a cleared member released at this extract. */
  readonly released: 'all' | 'none' | ReadonlySet<string>
  /** The plan's `release.namesFailed`. */
  readonly namesFailed: boolean
  /** False for withdrawn extracts, practice on a dummy list and whatever stands outside the ledger. */
  readonly registeredInLedger: boolean
}

const HELD = { word: 'held-behind-the-blind', step: null, reason: null, setAside: null, changesQuestion: false } as const

/** Whether arm-dependent verdicts of this report can be released at all. */
function releasable({ allocation, extract }: Report, { registeredInLedger }: ReleaseState): boolean {
  return registeredInLedger && allocation.state !== 'dummy' && (extract.standing === 'look' || extract.standing === 'decision-point')
}

function isReleased(report: Report, analysis: string, state: ReleaseState): boolean {
  if (!releasable(report, state) || state.released === 'none') return false
  return state.released === 'all' || state.released.has(analysis)
}

/** How much of an arm-dependent verdict is told: nothing, its word and step, or also which prerequisites failed. */
type Telling = 'nothing' | 'word' | 'named'

function seenPrerequisite(prerequisite: PrerequisiteReport, telling: Telling): SeenPrerequisite {
  if (!prerequisite.dependsOnArms) return prerequisite
  return { ...prerequisite, verdict: telling === 'named' ? prerequisite.verdict : 'held', reason: null, samples: [], figures: [] }
}

function seenStep(step: StepReport, verdict: VerdictReport | null, telling: Telling): SeenStep {
  const decides = verdict !== null && step.step === verdict.step
  const reason = decides ? verdict.reason : null
  if (telling === 'named') return { ...step, reason, prerequisites: step.prerequisites.map(each => seenPrerequisite(each, telling)) }
  const told = decides ? { triggered: step.triggered, outcome: step.outcome } : { triggered: null, outcome: 'held' as const }
  return { ...step, ...told, reason, prerequisites: [] }
}

/** An analysis that is formed with arms, for someone not cleared while the blind holds. */
function blindedAnalysis(analysis: AnalysisReport, released: boolean, { namesFailed }: ReleaseState): SeenAnalysis {
  const { armFreeVerdict, ...rest } = analysis
  const told = armFreeVerdict ?? (released ? analysis.verdict : null)
  // An arm-free cause is told without a release, so nothing formed with arms is named beside it.
  const names = namesFailed && released && armFreeVerdict === null
  const telling: Telling = told === null ? 'nothing' : names ? 'named' : 'word'
  return {
    ...rest,
    verdict: told ?? HELD,
    released: told !== null,
    prerequisites: analysis.prerequisites.map(each => seenPrerequisite(each, telling)),
    steps: analysis.steps.map(step => seenStep(step, told, telling)),
    byArm: null,
    plot: null,
  }
}

function wholeAnalysis({ armFreeVerdict, ...analysis }: AnalysisReport, told: boolean): SeenAnalysis {
  return { ...analysis, released: told || !analysis.dependsOnArms || armFreeVerdict !== null }
}

/**
 * The only way from a report to a person. Whatever a viewer who is not cleared receives while the blind holds
 * is a function of the arm-free columns and of released verdicts alone.
 */
export function release(report: Report, viewer: ReleaseViewer, state: ReleaseState): SeenReport {
  const { analyses, allocation, ...rest } = report
  const open = state.openLabel || state.blindBroken
  const whole = open || viewer.cleared
  return {
    ...rest,
    view: whole ? 'whole' : 'blinded',
    allocation: { state: allocation.state, hash: whole ? allocation.hash : null },
    analyses: analyses.map((analysis) => {
      const released = isReleased(report, analysis.analysis, state)
      if (whole) return wholeAnalysis(analysis, open || released)
      return analysis.dependsOnArms ? blindedAnalysis(analysis, released, state) : { ...wholeAnalysis(analysis, true), byArm: null }
    }),
  }
}
