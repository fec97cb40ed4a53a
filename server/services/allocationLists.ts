import type { Allocation } from '../../shared/decision/columns'
import type { Plan } from '../../shared/plan/schema'
import type { Queryable } from '../database/client'
import { plannedArms, readAllocation } from '../readers/allocationList'
import { readBlob } from './blobs'
import type { AllocationRow } from './checkInputs'

/**
 * Opens the sealed list, in memory alone, for the judge: planned arm by subject. Nothing else may call this.
 *
 * @param subjectColumns the columns that make a subject's id in the extract at hand.
 * @returns null when the list does not fit the plan version that the extract is judged under.
 */
export async function sealedList(db: Queryable, { blobId }: AllocationRow, plan: Plan, subjectColumns: readonly string[]): Promise<Allocation | null> {
  const { subjects, findings } = await readAllocation(readBlob(db, blobId), plan, subjectColumns)
  return findings.counts.refuse > 0 ? null : plannedArms(subjects)
}
