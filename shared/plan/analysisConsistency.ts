import type { Comparison, PlannedAnalysis } from './analysisSchema'
import { fallbackConsistency } from './fallbackConsistency'
import { issueAt, issueIf, type PlanIssue } from './issues'
import { fits, measureOf } from './methods'
import { prerequisiteConsistency } from './prerequisiteConsistency'
import type { Plan } from './schema'

type Path = readonly (string | number)[]
type Arms = Extract<Comparison, { kind: 'arms' }>

/** More would make the table of what leads where longer than anybody reads: 2^8 rows. */
export const MOST_SWITCHES = 8

const known = (list: readonly { id: string }[], id: string) => list.some(member => member.id === id)

const ADJUSTMENTS: Record<Arms['contrast'], readonly Arms['adjustment'][]> = {
  'one': ['none'],
  'global': ['none'],
  'all-pairs': ['none', 'bonferroni', 'holm', 'tukey'],
  'all-against-control': ['none', 'bonferroni', 'holm', 'dunnett'],
}

function contrastIssues({ arms, contrast, control, adjustment }: Arms, path: Path): PlanIssue[] {
  const possible = ADJUSTMENTS[contrast]
  const unwanted = control !== null && (contrast === 'global' || contrast === 'all-pairs')
  return [
    ...issueIf(contrast === 'one' && arms.length !== 2, [...path, 'contrast'], 'contrast-needs-two-arms'),
    ...issueIf(contrast === 'all-against-control' && control === null, [...path, 'control'], 'control-missing'),
    ...issueIf(unwanted, [...path, 'control'], 'control-not-wanted'),
    ...issueIf(!unwanted && control !== null && !arms.includes(control), [...path, 'control'], 'control-not-compared'),
    ...issueIf(!possible.includes(adjustment), [...path, 'adjustment'], 'adjustment-not-possible', { possible: [...possible] }),
  ]
}

function comparisonIssues(plan: Plan, comparison: Comparison, path: Path): PlanIssue[] {
  const visit = (id: string, field: string) => issueIf(!known(plan.visits, id), [...path, field], 'unknown-visit', { id })
  if (comparison.kind === 'constant') return visit(comparison.visit, 'visit')
  if (comparison.kind === 'occasions') {
    const { first, second } = comparison
    return [...visit(first, 'first'), ...visit(second, 'second'), ...issueIf(first === second, [...path, 'second'], 'occasions-equal')]
  }
  const arms = comparison.arms.flatMap((id, index) => [
    ...issueIf(!known(plan.arms, id), [...path, 'arms', index], 'unknown-arm', { id }),
    ...issueIf(comparison.arms.indexOf(id) < index, [...path, 'arms', index], 'arm-repeated', { id }),
  ])
  return [...arms, ...contrastIssues(comparison, path), ...visit(comparison.visit, 'visit')]
}

function methodIssues({ method, comparison, summaryMeasure, direction }: PlannedAnalysis, path: Path): PlanIssue[] {
  if (!fits(method, method, comparison)) return [issueAt([...path, 'method'], 'method-does-not-fit')]
  const measure = measureOf(method, method, comparison.kind)
  const undirected = comparison.kind === 'arms' && comparison.contrast === 'global'
  return [
    ...issueIf(summaryMeasure !== measure, [...path, 'summaryMeasure'], 'measure-not-possible', { possible: measure === null ? [] : [measure] }),
    ...issueIf(undirected && direction !== 'two-sided', [...path, 'direction'], 'direction-not-possible'),
  ]
}

/** What is wrong in one planned analysis. */
export function analysisConsistency(plan: Plan, analysis: PlannedAnalysis, path: Path): PlanIssue[] {
  const { endpoint, analysisSet, comparison, prerequisites, fallbacks, notAssessableLeadsTo } = analysis
  const switches = prerequisites.filter(({ onFailure }) => onFailure === 'switch').length
  const astray = notAssessableLeadsTo !== null && !known(fallbacks, notAssessableLeadsTo)
  return [
    ...issueIf(!known(plan.endpoints, endpoint), [...path, 'endpoint'], 'unknown-endpoint', { id: endpoint }),
    ...issueIf(!known(plan.analysisSets, analysisSet), [...path, 'analysisSet'], 'unknown-set', { id: analysisSet }),
    ...comparisonIssues(plan, comparison, [...path, 'comparison']),
    ...methodIssues(analysis, path),
    ...issueIf(switches > MOST_SWITCHES, [...path, 'prerequisites'], 'too-many-switches', { most: MOST_SWITCHES }),
    ...prerequisites.flatMap((prerequisite, index) => prerequisiteConsistency(comparison, prerequisite, [...path, 'prerequisites', index])),
    ...fallbacks.flatMap((step, index) => fallbackConsistency(plan, analysis, step, [...path, 'fallbacks', index])),
    ...issueIf(astray, [...path, 'notAssessableLeadsTo'], 'unknown-step', { id: notAssessableLeadsTo ?? '' }),
  ]
}
