import type { MemoVerdict } from '../../shared/memo/content'
import type { PlannedAnalysis } from '../../shared/plan/analysisSchema'
import type { Reason } from '../../shared/plan/terms'
import type { Say } from './words'

/** A step by its place in the registered order and its method, e.g. `step 2, planned method after log`. */
export function stepName(analysis: PlannedAnalysis, step: string | null, say: Say): string {
  const index = analysis.fallbacks.findIndex(fallback => fallback.id === step)
  const found = analysis.fallbacks[index]
  return found ? say('memo.step.name', { place: index + 1, method: say(`plan.methods.${found.method}`) }) : ''
}

export const reasonWords = (reason: string | Reason | null, say: Say) => reason === null ? '' : say(`verdict.reason.${reason}`)

/** The verdict of a planned analysis in one line, with the step or the reason that belongs to it. */
export function verdictWords(analysis: PlannedAnalysis, { word, step, reason }: Pick<MemoVerdict, 'word' | 'step' | 'reason'>, say: Say): string {
  if (word === 'fallback-applies') return say('memo.verdict.applies', { step: stepName(analysis, step, say) })
  const said = say(`verdict.word.${word}`)
  return reason === null ? said : say('memo.verdict.because', { verdict: said, reason: reasonWords(reason, say) })
}
