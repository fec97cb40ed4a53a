import type { PrerequisiteVerdict, SeenVerdict } from '#shared/plan/terms'

/** The five states of the leaf. */
export type MarkState = 'ok' | 'fallback' | 'none' | 'not-assessable' | 'held'

const MARKS: Record<SeenVerdict | PrerequisiteVerdict | 'held', MarkState> = {
  'planned-method-stands': 'ok',
  'fallback-applies': 'fallback',
  'no-registered-method': 'none',
  'not-assessable': 'not-assessable',
  'held-behind-the-blind': 'held',
  'met': 'ok',
  'not-met': 'none',
  'held': 'held',
}

export const markOf = (verdict: SeenVerdict | PrerequisiteVerdict | 'held'): MarkState => MARKS[verdict]
