import { analysisConsistency } from './analysisConsistency'
import type { PlanIssue } from './issues'
import type { Plan } from './schema'
import { studyConsistency } from './studyConsistency'

/**
 * The rules that look across the parts of a plan: references, methods against what is compared, limits against
 * procedures, looks against one another. An empty answer means that the plan can be judged by.
 */
export function consistency(plan: Plan): PlanIssue[] {
  return [...studyConsistency(plan), ...plan.analyses.flatMap((analysis, index) => analysisConsistency(plan, analysis, ['analyses', index]))]
}
