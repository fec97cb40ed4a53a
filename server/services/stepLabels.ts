import type { Fallback } from '../../shared/plan/analysisSchema'
import { say } from '../../shared/wording/say'

/** The method of the step that a verdict names, in words; null when it names none. */
export function stepLabel(fallbacks: readonly Fallback[], { step }: { readonly step: string | null }): string | null {
  const found = fallbacks.find(({ id }) => id === step)
  return found ? say('en', `plan.methods.${found.method}`) : null
}
