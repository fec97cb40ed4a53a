import type { PlannedAnalysis } from '../plan/analysisSchema'
import type { Plan } from '../plan/schema'
import type { Allocation, ExtractColumns } from './columns'
import type { ArmKnowledge } from './rule'
import type { Selection } from './select'

/** Arms of subjects as an open-label extract carries them. */
export function armsInExtract({ subject, arm }: ExtractColumns): Allocation {
  const arms: Record<string, string> = Object.create(null) as Record<string, string>
  subject.forEach((id, row) => {
    const own = arm?.[row] ?? ''
    if (own !== '') arms[id] ??= own
  })
  return arms
}

export const armOf = (allocation: Allocation, subject: string): string | null => (Object.hasOwn(allocation, subject) ? allocation[subject] ?? null : null)

/** Whether the arms of everybody who should have a value are known, as arms of the plan. */
export function armKnowledge(plan: Plan, { expected }: Selection, allocation: Allocation | null): ArmKnowledge {
  if (allocation === null) return 'none'
  const arms = new Set(plan.arms.map(({ id }) => id))
  return expected.every(subject => arms.has(armOf(allocation, subject) ?? '')) ? 'known' : 'partial'
}

/** The compared arms in the plan's order; empty in an analysis without arms. */
export const comparedArms = ({ comparison }: PlannedAnalysis): readonly string[] => (comparison.kind === 'arms' ? comparison.arms : [])
