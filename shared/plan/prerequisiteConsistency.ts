import type { Comparison } from './analysisSchema'
import { issueIf, type PlanIssue } from './issues'
import type { Prerequisite, Requirement } from './prerequisiteSchema'
import { PREREQUISITES } from './prerequisites'

type Path = readonly (string | number)[]
type Shape = Extract<Requirement, { kind: 'normality' | 'equal-spread' | 'symmetry' }>

const isShape = (requirement: Requirement): requirement is Shape => 'quantity' in requirement

function quantityIssues(comparison: Comparison, requirement: Requirement, path: Path): PlanIssue[] {
  const { comparisons, quantities } = PREREQUISITES[requirement.kind]
  if (!comparisons.includes(comparison.kind)) return issueIf(true, [...path, 'kind'], 'kind-not-possible')
  if (!isShape(requirement)) return []
  const possible = quantities[comparison.kind] ?? []
  return issueIf(!possible.includes(requirement.quantity), [...path, 'quantity'], 'quantity-not-possible', { possible: [...possible] })
}

/** A procedure is asked for with fewer values than it is defined for. */
function minimumIssues(requirement: Shape, path: Path): PlanIssue[] {
  const { size } = requirement.limits
  const significance = 'significance' in requirement.limits ? requirement.limits.significance : null
  const procedures: string[] = [...size ? [size.measure] : [], ...significance ? [significance.procedure] : []]
  return procedures.flatMap((procedure) => {
    const least = PREREQUISITES[requirement.kind].least[procedure] ?? 0
    return issueIf(requirement.minimum < least, [...path, 'minimum'], 'minimum-below-procedure', { procedure, least })
  })
}

/** The interval of a ratio of SDs is known for two arms only; a ratio of largest to smallest is never below one. */
function spreadIssues(comparison: Comparison, requirement: Requirement, path: Path): PlanIssue[] {
  if (requirement.kind !== 'equal-spread' || requirement.limits.size === null) return []
  const { limit, reading } = requirement.limits.size
  const several = comparison.kind === 'arms' && comparison.arms.length > 2
  return [
    ...issueIf(several && reading !== 'estimate', [...path, 'limits', 'size', 'reading'], 'reading-needs-two-arms'),
    ...issueIf(limit <= 1, [...path, 'limits', 'size', 'limit'], 'limit-not-above-one'),
  ]
}

/** Only p-values of several arms can be adjusted for one another. */
function multiplicityIssues(requirement: Requirement, path: Path): PlanIssue[] {
  if (requirement.kind !== 'normality' || requirement.multiplicity === 'none') return []
  const adjustable = requirement.quantity === 'values-within-arms' && requirement.limits.significance !== null
  return issueIf(!adjustable, [...path, 'multiplicity'], 'multiplicity-not-possible')
}

function scopeIssues(comparison: Comparison, requirement: Requirement, path: Path): PlanIssue[] {
  const byArm = (requirement.kind === 'count' && requirement.scope === 'per-arm')
    || (requirement.kind === 'missing-values' && requirement.scope === 'compared-arms')
  return issueIf(byArm && comparison.kind !== 'arms', [...path, 'scope'], 'scope-needs-arms')
}

/** What is wrong in one prerequisite of a planned method or of a step. */
export function prerequisiteConsistency(comparison: Comparison, requirement: Requirement | Prerequisite, path: Path): PlanIssue[] {
  const { consequences } = PREREQUISITES[requirement.kind]
  const astray = 'onFailure' in requirement && !consequences.includes(requirement.onFailure)
  return [
    ...quantityIssues(comparison, requirement, path),
    ...isShape(requirement) ? minimumIssues(requirement, path) : [],
    ...spreadIssues(comparison, requirement, path),
    ...multiplicityIssues(requirement, path),
    ...scopeIssues(comparison, requirement, path),
    ...issueIf(astray, [...path, 'onFailure'], 'consequence-not-possible', { possible: [...consequences] }),
  ]
}
