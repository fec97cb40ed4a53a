import type { PlannedAnalysis } from '../../shared/plan/analysisSchema'
import { describeStep } from '../../shared/plan/describe'
import { wordPhrase } from '../../shared/plan/phrase'
import { say } from '../../shared/wording/say'

/** The method of the step that a verdict names, in words; null when it names none. */
export function stepLabel(analysis: Pick<PlannedAnalysis, 'method' | 'fallbacks'>, { step }: { readonly step: string | null }): string | null {
  const found = analysis.fallbacks.find(({ id }) => id === step)
  return found ? wordPhrase(describeStep(analysis, found), (key, params) => say('en', key, params)) : null
}
