import { and, desc, eq, inArray } from 'drizzle-orm'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { studyEvent } from '../database/schema/check'

/** The extract on which the database is locked, whose verdicts bind; null before the lock and after an unlock. */
export async function bindingExtract(db: Queryable, studyId: StudyId): Promise<ExtractId | null> {
  const [newest] = await db.select({ kind: studyEvent.kind, extractId: studyEvent.extractId }).from(studyEvent)
    .where(and(eq(studyEvent.studyId, studyId), inArray(studyEvent.kind, ['database-locked', 'database-unlocked'])))
    .orderBy(desc(studyEvent.at), desc(studyEvent.id)).limit(1)
  return newest?.kind === 'database-locked' ? newest.extractId : null
}
