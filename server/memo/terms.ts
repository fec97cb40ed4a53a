import type { MemoVerdict } from '../../shared/memo/content'
import type { PlannedAnalysis } from '../../shared/plan/analysisSchema'
import { describeStep } from '../../shared/plan/describe'
import { wordPhrase } from '../../shared/plan/phrase'
import type { Reason } from '../../shared/plan/terms'
import type { Say } from './words'

/** Place in the registered order, from 1, and method of a step; null where there is no such step. */
function placeOf(analysis: PlannedAnalysis, step: string | null, say: Say): { place: number, method: string } | null {
  const index = analysis.fallbacks.findIndex(({ id }) => id === step)
  const found = analysis.fallbacks[index]
  return found ? { place: index + 1, method: wordPhrase(describeStep(analysis, found), say) } : null
}

/** A step within a sentence, e.g. `step 2, planned method on logarithms`. */
export function stepName(analysis: PlannedAnalysis, step: string | null, say: Say): string {
  const place = placeOf(analysis, step, say)
  return place ? say('memo.step.name', { ...place }) : ''
}

/** A step at the head of its block. */
export function stepHead(analysis: PlannedAnalysis, step: string, say: Say): string {
  const place = placeOf(analysis, step, say)
  return place ? say('memo.step.head', { ...place }) : step
}

export const reasonWords = (reason: string | Reason | null, say: Say) => reason === null ? '' : say(`verdict.reason.${reason}`)

/** The verdict of a planned analysis in one line, with the step or the reason that belongs to it. */
export function verdictWords(analysis: PlannedAnalysis, { word, step, reason }: Pick<MemoVerdict, 'word' | 'step' | 'reason'>, say: Say): string {
  const place = word === 'fallback-applies' ? placeOf(analysis, step, say) : null
  if (place) return say('memo.verdict.applies', { ...place })
  const said = say(`verdict.word.${word}`)
  return reason === null ? said : say('memo.verdict.because', { verdict: said, reason: reasonWords(reason, say) })
}

/** Roles as they were at signing, kept as codes separated by blanks. */
export const roleWords = (role: string, say: Say) => role.split(' ').map(each => say(`access.roles.${each}`)).join(', ')
