import type { Reason } from '../../plan/terms'
import type { SampleProblem } from '../../statistics/types'
import { MET, NOT_ASSESSABLE, NOT_MET, outcome } from '../codes'
import { type Breach, BREAKS, KEEPS, UNTOLD } from './limits'

export interface OtherReading {
  readonly tooFewData: 'met' | 'not-met' | null
  readonly procedureUndefined: 'met' | 'not-met' | null
}

/** Why nothing can be told of a sample, for the two reasons that a plan may read otherwise. */
export type Untold = Extract<Reason, 'too-few-data' | 'procedure-undefined'>

export const untoldFor = (problem: SampleProblem | null): Untold => (problem === 'sample-too-small' ? 'too-few-data' : 'procedure-undefined')

/** What a plan reads where nothing can be told. */
export function readOtherwise(reason: Untold, { tooFewData, procedureUndefined }: OtherReading): Breach {
  const reading = reason === 'too-few-data' ? tooFewData : procedureUndefined
  return reading === null ? UNTOLD : reading === 'met' ? KEEPS : BREAKS
}

/**
 * A breach as the outcome of a prerequisite.
 *
 * @param reason why it could not be told, whether or not the plan reads it otherwise; null when it could.
 */
export function verdictOf(breach: Breach, reason: Untold | null): number {
  if (breach === BREAKS) return outcome(NOT_MET, reason)
  return breach === KEEPS ? outcome(MET, reason) : outcome(NOT_ASSESSABLE, reason ?? 'procedure-undefined')
}

/** The outcome of a prerequisite that is judged as a whole: untold ones are read as the plan says. */
export const wholeVerdict = (breach: Breach, reason: Untold, otherReading: OtherReading): number =>
  (Number.isNaN(breach) ? verdictOf(readOtherwise(reason, otherReading), reason) : verdictOf(breach, null))
