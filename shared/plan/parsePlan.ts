import { findingsOf } from '../schemas/findings'
import { consistency } from './consistency'
import type { PlanIssue } from './issues'
import { planSchema, type Plan } from './schema'

export type ParsedPlan = { readonly ok: true, readonly plan: Plan } | { readonly ok: false, readonly issues: readonly PlanIssue[] }

const copy = (params: Readonly<Record<string, string | number | readonly string[]>>): PlanIssue['params'] =>
  Object.fromEntries(Object.entries(params).map(([name, value]) => [name, typeof value === 'object' ? [...value] : value]))

/**
 * Reads a plan document: first its shape, then, once that is right, its consistency. Never throws.
 *
 * @param document any parsed JSON.
 */
export function parsePlan(document: unknown): ParsedPlan {
  const shape = planSchema.safeParse(document)
  if (!shape.success) {
    const issues = findingsOf(shape.error).map(({ pointer = '', code, params }) => (params ? { pointer, code, params: copy(params) } : { pointer, code }))
    return { ok: false, issues }
  }
  const issues = consistency(shape.data)
  return issues.length > 0 ? { ok: false, issues } : { ok: true, plan: shape.data }
}
