import type { PlannedAnalysis } from './analysisSchema'
import type { Requirement } from './prerequisiteSchema'
import type { Plan } from './schema'

/**
 * Whether judging a prerequisite needs to know who is in which arm. Between arms, everything that is formed
 * from arms does, pooled residuals included; so does picking the subjects of some arms out of all.
 */
export function dependsOnArms(plan: Pick<Plan, 'arms'>, analysis: Pick<PlannedAnalysis, 'comparison'>, requirement: Requirement): boolean {
  const { comparison } = analysis
  if (comparison.kind !== 'arms') return false
  const picksArms = comparison.arms.length < plan.arms.length
  switch (requirement.kind) {
    case 'count': return requirement.scope === 'per-arm'
    case 'missing-values': return requirement.scope === 'compared-arms' && picksArms
    case 'positive-values': return picksArms
    default: return true
  }
}

/** Whether any prerequisite of the planned method or of a step is formed with arms, reported-only ones included. */
export function analysisDependsOnArms(plan: Pick<Plan, 'arms'>, analysis: PlannedAnalysis): boolean {
  const all = [...analysis.prerequisites, ...analysis.fallbacks.flatMap(step => step.prerequisites)]
  return all.some(requirement => dependsOnArms(plan, analysis, requirement))
}
