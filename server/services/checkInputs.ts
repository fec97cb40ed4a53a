import { and, desc, eq, ne } from 'drizzle-orm'
import { queryKey, type Resolutions } from '../../shared/decision/screen'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { allocation, dataQuery, extract } from '../database/schema/extract'
import { DomainError } from '../domainError'
import type { CheckedReport, ExtractRow } from './checkedReports'
import { readSignedPlan, type SignedPlan } from './plans'

export type AllocationRow = typeof allocation.$inferSelect

/** What a run is made from, beside the columns that never change. */
export interface CheckInputs {
  readonly extract: ExtractRow
  readonly plan: SignedPlan
  /** The newest accepted list; null in open-label studies and while there is none. */
  readonly allocation: AllocationRow | null
  /** Queries that were cleared or overruled; every other one is open. */
  readonly queries: Resolutions
}

async function newestAllocation(db: Queryable, studyId: StudyId): Promise<AllocationRow | null> {
  const [row] = await db.select().from(allocation)
    .where(and(eq(allocation.studyId, studyId), eq(allocation.kind, 'true'), eq(allocation.state, 'accepted')))
    .orderBy(desc(allocation.receivedAt), desc(allocation.id)).limit(1)
  return row ?? null
}

async function resolvedQueries(db: Queryable, studyId: StudyId, extractId: ExtractId): Promise<Resolutions> {
  const rows = await db.select({ screen: dataQuery.screen, endpoint: dataQuery.endpoint, state: dataQuery.state }).from(dataQuery)
    .where(and(eq(dataQuery.studyId, studyId), eq(dataQuery.extractId, extractId), ne(dataQuery.state, 'open')))
    .orderBy(dataQuery.number)
  return Object.fromEntries(rows.map(({ screen, endpoint, state }) => [queryKey(screen, endpoint), state]))
}

/** @throws {DomainError} `not-found`. */
export async function loadInputs(db: Queryable, { studyId, extractId }: { studyId: StudyId, extractId: ExtractId }): Promise<CheckInputs> {
  const [row] = await db.select().from(extract).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId)))
  if (!row) throw new DomainError('not-found')
  const plan = await readSignedPlan(db, { studyId, planId: row.planId })
  return {
    extract: row,
    plan,
    allocation: plan.document.blinding === 'blinded' ? await newestAllocation(db, studyId) : null,
    queries: await resolvedQueries(db, studyId, extractId),
  }
}

const sameQueries = (one: Resolutions, other: Resolutions): boolean => {
  const keys = new Set([...Object.keys(one), ...Object.keys(other)])
  return [...keys].every(key => one[key] === other[key])
}

/** Whether nothing that a run is made from has changed between two readings. */
export const sameInputs = (one: CheckInputs, other: CheckInputs): boolean =>
  one.extract.state === other.extract.state && one.allocation?.id === other.allocation?.id && sameQueries(one.queries, other.queries)

/** Whether a run was made from the newest list and from what was decided about every query. */
export async function isCurrent(db: Queryable, { extract: { studyId, id }, check, report }: CheckedReport): Promise<boolean> {
  const { allocation: newest, queries } = await loadInputs(db, { studyId, extractId: id })
  const judgedWith = Object.fromEntries(report.screens
    .filter(({ query }) => query === 'cleared' || query === 'overruled')
    .map(({ screen, endpoint, query }) => [queryKey(screen, endpoint), query ?? 'open']))
  return (newest?.id ?? null) === check.allocationId && sameQueries(queries, judgedWith)
}
