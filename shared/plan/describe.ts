import type { Fallback, PlannedAnalysis, Transformation, Trigger } from './analysisSchema'
import { type Phrase, phrase } from './phrase'
import type { Requirement } from './prerequisiteSchema'
import type { Plan } from './schema'

type Shape = Extract<Requirement, { kind: 'normality' | 'equal-spread' | 'symmetry' }>
type Count = Extract<Requirement, { kind: 'count' }>

/** What breaks a shape or spread prerequisite: a size, a level, or the two joined. */
export function describeLimits({ limits }: Pick<Shape, 'limits'>): Phrase {
  const size = limits.size === null
    ? null
    : phrase('plan.describe.size', { measure: phrase(`plan.describe.measures.${limits.size.measure}`), limit: limits.size.limit, reading: phrase(`plan.readings.${limits.size.reading}`) })
  const level = 'significance' in limits && limits.significance !== null
    ? phrase('plan.describe.significance', { procedure: phrase(`plan.describe.procedures.${limits.significance.procedure}`), level: limits.significance.level })
    : null
  if (size !== null && level !== null && 'broken' in limits) return phrase(`plan.describe.${limits.broken}`, { size, level })
  return size ?? level ?? phrase('plan.describe.nothing')
}

function describeShape(requirement: Shape): Phrase {
  const adjusted = requirement.kind === 'normality' && requirement.multiplicity !== 'none'
  return phrase(`plan.describe.shapes.${requirement.kind}`, {
    quantity: phrase(`plan.quantities.${requirement.quantity}`),
    limits: describeLimits(requirement),
    minimum: requirement.minimum,
    adjustment: adjusted ? phrase(`plan.describe.adjusted.${requirement.multiplicity}`) : '',
  })
}

function describeCount({ scope, least }: Count): Phrase {
  return least.kind === 'number'
    ? phrase(`plan.describe.count.${scope}.number`, { n: least.n })
    : phrase(`plan.describe.count.${scope}.share`, { percent: Math.round(least.share * 1000) / 10 })
}

/** One plain sentence: what is judged, on what, and when it fails. */
export function describePrerequisite(requirement: Requirement): Phrase {
  switch (requirement.kind) {
    case 'positive-values': return phrase('plan.describe.positive-values')
    case 'count': return describeCount(requirement)
    case 'missing-values': return phrase(`plan.describe.missing-values.${requirement.scope}`, { percent: Math.round(requirement.most * 1000) / 10 })
    default: return describeShape(requirement)
  }
}

/** When a step is tried: which failures, by the ids that the plan gives them. */
export function describeTrigger(trigger: Trigger): Phrase {
  return trigger.kind === 'any' ? phrase('plan.describe.trigger.any') : phrase(`plan.describe.trigger.${trigger.kind}`, { of: trigger.of.join(', ') })
}

export function describeTransformation({ base, shift, source }: Transformation): Phrase {
  return shift === 0 ? phrase('plan.describe.log', { base, source }) : phrase('plan.describe.logShifted', { base, shift, source })
}

/** A step by its method; after the logarithm it is the planned method by its own name. */
export const describeStep = ({ method: planned }: Pick<PlannedAnalysis, 'method'>, { method }: Pick<Fallback, 'method'>): Phrase =>
  method === 'planned-after-log' ? phrase('plan.describe.afterLog', { method: phrase(`plan.methods.${planned}`) }) : phrase(`plan.methods.${method}`)

/** A step in order: its method, its transformation if any, its trigger, its own prerequisites. */
export function describeFallback(step: Fallback): Phrase[] {
  return [
    phrase(`plan.methods.${step.method}`),
    ...step.transformation === null ? [] : [describeTransformation(step.transformation)],
    describeTrigger(step.trigger),
    ...step.prerequisites.map(describePrerequisite),
  ]
}

/** What is compared, with arms and visits by their labels. */
export function describeComparison(plan: Pick<Plan, 'arms' | 'visits'>, { comparison, nullValue }: Pick<PlannedAnalysis, 'comparison' | 'nullValue'>): Phrase {
  const visit = (id: string) => plan.visits.find(each => each.id === id)?.label ?? id
  if (comparison.kind === 'occasions') return phrase('plan.describe.comparison.occasions', { first: visit(comparison.first), second: visit(comparison.second) })
  if (comparison.kind === 'constant') return phrase('plan.describe.comparison.constant', { visit: visit(comparison.visit), constant: nullValue })
  const arms = comparison.arms.map(id => plan.arms.find(arm => arm.id === id)?.label ?? id).join(', ')
  return phrase('plan.describe.comparison.arms', { arms, visit: visit(comparison.visit), contrast: phrase(`plan.contrasts.${comparison.contrast}`) })
}
