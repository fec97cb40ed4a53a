import type { Fallback, PlannedAnalysis, Trigger } from './analysisSchema'
import { issueAt, type PlanIssue } from './issues'
import type { Prerequisite, Requirement } from './prerequisiteSchema'

/** One way in which the switch prerequisites can fail, and where it leads. */
export interface CompletenessRow {
  readonly failed: readonly string[]
  /** Every step whose trigger is then true, in order; a later one takes over when an earlier one's own prerequisites fail. */
  readonly steps: readonly string[]
  /** The first of them; null: no registered method applies. */
  readonly first: string | null
}

export interface Completeness {
  readonly switches: readonly string[]
  /** One row for each combination of failed switch prerequisites, the empty one left out. */
  readonly rows: readonly CompletenessRow[]
  /** Pointers are relative to the planned analysis. */
  readonly remarks: readonly PlanIssue[]
}

/** Whether a step's trigger is true when exactly these switch prerequisites failed. */
export function triggers(trigger: Trigger, failed: readonly string[]): boolean {
  if (trigger.kind === 'any') return failed.length > 0
  const named = trigger.of.every(id => failed.includes(id))
  return trigger.kind === 'at-least' ? named : named && failed.length === trigger.of.length
}

function combinations(ids: readonly string[]): string[][] {
  return Array.from({ length: (1 << ids.length) - 1 }, (_, index) => ids.filter((_id, bit) => ((index + 1) >> bit) % 2 === 1))
}

/** Unreachable: whenever its trigger is true, an earlier step without prerequisites of its own has taken over. */
function unreachable({ fallbacks }: PlannedAnalysis, rows: readonly CompletenessRow[]): PlanIssue[] {
  const unconditional = new Set(fallbacks.filter(step => step.prerequisites.length === 0).map(({ id }) => id))
  const reached = new Set(rows.flatMap(({ steps }) => {
    const end = steps.findIndex(id => unconditional.has(id))
    return end < 0 ? steps : steps.slice(0, end + 1)
  }))
  return fallbacks.flatMap(({ id }, index) => (reached.has(id) ? [] : [issueAt(['fallbacks', index], 'unreachable-step', { step: id })]))
}

const sameMatter = (a: Requirement, b: Requirement) =>
  a.kind === b.kind && ('quantity' in a ? 'quantity' in b && a.quantity === b.quantity : !('quantity' in b))

/** A step that asks, of untransformed values, for what its trigger says has just failed. */
function contradicted(analysis: PlannedAnalysis, step: Fallback, index: number): PlanIssue[] {
  const { trigger } = step
  if (trigger.kind === 'any' || step.transformation !== null) return []
  const failed = analysis.prerequisites.filter((prerequisite: Prerequisite) => trigger.of.includes(prerequisite.id))
  return step.prerequisites.flatMap((requirement, place) => failed
    .filter(prerequisite => sameMatter(prerequisite, requirement))
    .map(({ id }) => issueAt(['fallbacks', index, 'prerequisites', place], 'contradicted-step', { step: step.id, prerequisite: id })))
}

/**
 * Where every combination of failed switch prerequisites leads. "No registered method applies" is an answer,
 * not a gap; the remarks name steps that can never apply and steps that ask for what has just failed.
 */
export function completeness(analysis: PlannedAnalysis): Completeness {
  const switches = analysis.prerequisites.filter(({ onFailure }) => onFailure === 'switch').map(({ id }) => id)
  const rows = combinations(switches).map((failed): CompletenessRow => {
    const steps = analysis.fallbacks.filter(({ trigger }) => triggers(trigger, failed)).map(({ id }) => id)
    return { failed, steps, first: steps[0] ?? null }
  })
  const remarks = [...unreachable(analysis, rows), ...analysis.fallbacks.flatMap((step, index) => contradicted(analysis, step, index))]
  return { switches, rows, remarks }
}
