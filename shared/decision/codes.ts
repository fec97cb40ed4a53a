import type { AnalysisVerdict, Reason } from '../plan/terms'
import { ANALYSIS_VERDICTS, REASONS } from '../plan/terms'

/** The compiled rule works on small integers; this file is the only one that knows their layout. */

export const MET = 0
export const NOT_MET = 1
export const NOT_ASSESSABLE = 2
/** Not asked yet. */
export const UNJUDGED = -1

const NO_REASON = 0
const reasonCode = (reason: Reason | null) => (reason === null ? NO_REASON : REASONS.indexOf(reason) + 1)
const reasonOf = (code: number): Reason | null => REASONS[code - 1] ?? null

/** What a prerequisite was found to be: a verdict of 2 bits and a reason of 4. */
export const outcome = (verdict: number, reason: Reason | null = null): number => verdict | (reasonCode(reason) << 2)
export const outcomeVerdict = (code: number): number => code & 3
export const outcomeReason = (code: number): Reason | null => reasonOf(code >> 2)

/** What became of a step. */
export const STEP_OUTCOMES = ['not-reached', 'not-triggered', 'prerequisite-not-met', 'not-assessable', 'applies'] as const
export const NOT_REACHED = 0
export const NOT_TRIGGERED = 1
export const PREREQUISITE_NOT_MET = 2
export const STEP_NOT_ASSESSABLE = 3
export const APPLIES = 4

export interface Decision {
  readonly word: AnalysisVerdict
  /** Index among the steps; null when none is concerned. */
  readonly step: number | null
  readonly reason: Reason | null
  readonly setAside: Reason | null
}

/** A decision of a planned analysis as one integer: word 2 bits, step 5, reason 4, reason set aside 4. */
export function encodeDecision({ word, step, reason, setAside }: Decision): number {
  return ANALYSIS_VERDICTS.indexOf(word) | ((step === null ? 0 : step + 1) << 2) | (reasonCode(reason) << 7) | (reasonCode(setAside) << 11)
}

export function decodeDecision(code: number): Decision {
  const word = ANALYSIS_VERDICTS[code & 3] ?? 'not-assessable'
  const step = (code >> 2) & 31
  return { word, step: step === 0 ? null : step - 1, reason: reasonOf((code >> 7) & 15), setAside: reasonOf((code >> 11) & 15) }
}
