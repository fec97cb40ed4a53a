import type { Fallback, PlannedAnalysis } from './analysisSchema'
import type { Plan } from './schema'

/** A step changes the question when it estimates something else than the planned method does. */
export function changesQuestion(analysis: Pick<PlannedAnalysis, 'summaryMeasure'>, step: Pick<Fallback, 'summaryMeasure'>): boolean {
  return analysis.summaryMeasure !== step.summaryMeasure
}

/** Every step that changes the question, by analysis and step id. */
export function stepsThatChange(plan: Plan): { analysis: string, step: string }[] {
  return plan.analyses.flatMap(analysis => analysis.fallbacks
    .filter(step => changesQuestion(analysis, step))
    .map(step => ({ analysis: analysis.id, step: step.id })))
}

/** A plan with such a step needs the reviewer's signature beside the author's. */
export function needsReviewer(plan: Plan): boolean {
  return stepsThatChange(plan).length > 0
}
