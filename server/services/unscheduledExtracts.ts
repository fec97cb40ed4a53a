import { and, asc, eq } from 'drizzle-orm'
import type { MemoUnscheduled } from '../../shared/memo/content'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { extract } from '../database/schema/extract'
import { signature } from '../database/schema/record'

/** Extracts that no look foresaw, with the reason that was signed for judging them. */
export async function unscheduledExtracts(db: Queryable, studyId: StudyId): Promise<MemoUnscheduled[]> {
  const rows = await db.select({ extract, reason: signature.reason }).from(extract)
    .leftJoin(signature, and(eq(signature.studyId, extract.studyId), eq(signature.subject, extract.id), eq(signature.meaning, 'reason-given')))
    .where(and(eq(extract.studyId, studyId), eq(extract.standing, 'unscheduled')))
    .orderBy(asc(extract.number))
  return rows.map(({ extract: { number, cutOff, receivedAt }, reason }) => ({ extract: number, cutOff, receivedAt: receivedAt.toISOString(), reason }))
}
