import type { Fallback, PlannedAnalysis } from './analysisSchema'
import { issueAt, issueIf, type PlanIssue } from './issues'
import { fits, measureOf, methodEntry } from './methods'
import { prerequisiteConsistency } from './prerequisiteConsistency'
import type { Plan } from './schema'

type Path = readonly (string | number)[]

function methodIssues({ method, comparison }: PlannedAnalysis, step: Fallback, path: Path): PlanIssue[] {
  if (!fits(step.method, method, comparison)) return [issueAt([...path, 'method'], 'method-does-not-fit')]
  const measure = measureOf(step.method, method, comparison.kind)
  return [
    ...issueIf(step.method === method, [...path, 'method'], 'step-repeats-plan'),
    ...issueIf(step.summaryMeasure !== measure, [...path, 'summaryMeasure'], 'measure-not-possible', { possible: measure === null ? [] : [measure] }),
  ]
}

/** The logarithm is named where it is used, is checked to be defined, and never taken of a percent change. */
function transformationIssues(plan: Plan, analysis: PlannedAnalysis, step: Fallback, path: Path): PlanIssue[] {
  const { transforms } = methodEntry(step.method, analysis.method)
  const { transformation } = step
  if (transformation === null) return issueIf(transforms, [...path, 'transformation'], 'transformation-missing')
  if (!transforms) return [issueAt([...path, 'transformation'], 'transformation-not-wanted')]
  const endpoint = plan.endpoints.find(({ id }) => id === analysis.endpoint)
  const constant = analysis.comparison.kind === 'constant' && analysis.nullValue + transformation.shift <= 0
  return [
    ...issueIf(endpoint?.derivation === 'percent-change', [...path, 'transformation'], 'log-of-percent-change'),
    ...issueIf(!step.prerequisites.some(({ kind }) => kind === 'positive-values'), [...path, 'prerequisites'], 'positive-values-missing'),
    ...issueIf(constant && endpoint?.derivation === 'none', [...path, 'transformation', 'shift'], 'null-value-not-positive'),
  ]
}

function triggerIssues({ prerequisites }: PlannedAnalysis, { trigger }: Fallback, path: Path): PlanIssue[] {
  if (trigger.kind === 'any') return issueIf(!prerequisites.some(({ onFailure }) => onFailure === 'switch'), [...path, 'trigger'], 'nothing-switches')
  return trigger.of.flatMap((id, index) => {
    const at = [...path, 'trigger', 'of', index]
    const named = prerequisites.find(prerequisite => prerequisite.id === id)
    if (named === undefined) return [issueAt(at, 'unknown-prerequisite', { id })]
    return [
      ...issueIf(named.onFailure !== 'switch', at, 'trigger-not-switch', { id }),
      ...issueIf(trigger.of.indexOf(id) < index, at, 'trigger-repeats', { id }),
    ]
  })
}

/** What is wrong in one step of the order. */
export function fallbackConsistency(plan: Plan, analysis: PlannedAnalysis, step: Fallback, path: Path): PlanIssue[] {
  return [
    ...methodIssues(analysis, step, path),
    ...transformationIssues(plan, analysis, step, path),
    ...triggerIssues(analysis, step, path),
    ...step.prerequisites.flatMap((requirement, index) => prerequisiteConsistency(analysis.comparison, requirement, [...path, 'prerequisites', index])),
  ]
}
