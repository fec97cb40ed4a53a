import type { DEVIATION_CLASSES, DEVIATION_STATES, SETTLEMENTS } from '../../shared/contract/deviations'
import type { SeenAnalysis } from '../../shared/decision/report'
import type { SeenVerdict } from '../../shared/plan/terms'

export type DeviationClass = typeof DEVIATION_CLASSES[number]
export type DeviationState = typeof DEVIATION_STATES[number]
export type SettlementKind = typeof SETTLEMENTS[number]
/** A verdict as everybody may see it. */
export type ToldVerdict = SeenAnalysis['verdict']

/** Verdicts that open a deviation once they are released. */
export const opensDeviation = (word: SeenVerdict) => word === 'fallback-applies' || word === 'no-registered-method'

/**
 * The class that a memo states.
 *
 * @param words released verdicts of the deviation, oldest first. One that could not be judged tells nothing
 *   new; the newest of the others decides.
 * @param overruled whether two biostatisticians have overruled the newest verdict.
 */
export function classOf(words: readonly SeenVerdict[], overruled: boolean): DeviationClass {
  if (overruled) return 'departure'
  const judged = words.filter(word => word !== 'not-assessable')
  return judged[judged.length - 1] === 'no-registered-method' ? 'unresolved' : 'foreseen-switch'
}

export interface SettlementFacts {
  readonly state: DeviationState
  /** The newest released verdict. */
  readonly word: SeenVerdict
  /** Whether any part of it is formed with arms. */
  readonly dependsOnArms: boolean
  /** Whether it was given at the registered decision point. */
  readonly atDecisionPoint: boolean
  readonly blindBroken: boolean
}

const SETTLEABLE: readonly DeviationState[] = ['open', 'under-observation']

/** What may be settled now. The order is that in which the kinds are offered. */
export function settlementsAllowed({ state, word, dependsOnArms, atDecisionPoint, blindBroken }: SettlementFacts): SettlementKind[] {
  if (!SETTLEABLE.includes(state)) return []
  const allowed: Readonly<Record<SettlementKind, boolean>> = {
    'accept-step': word === 'fallback-applies' || word === 'planned-method-stands',
    'keep-under-observation': !atDecisionPoint && state === 'open',
    'amend-plan': !blindBroken,
    'report-without-claim': word !== 'planned-method-stands',
    'overrule': !blindBroken && !dependsOnArms && opensDeviation(word),
  }
  const order: readonly SettlementKind[] = ['accept-step', 'keep-under-observation', 'amend-plan', 'report-without-claim', 'overrule']
  return order.filter(kind => allowed[kind])
}

export type AcknowledgementState = 'awaited' | 'acknowledged' | 'declined' | 'outstanding'

/** Silence after the days allowed is printed as such; it changes no verdict. */
export const acknowledgementState = (decision: 'acknowledged' | 'declined' | null, dueAt: Date, now: Date): AcknowledgementState =>
  decision ?? (now.getTime() > dueAt.getTime() ? 'outstanding' : 'awaited')
