import { and, asc, eq, sql } from 'drizzle-orm'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import type { exposureWay } from '../database/schema/member'
import { exposure } from '../database/schema/member'
import { person } from '../database/schema/person'
import { appendRecord } from './record'
import { actorOf, type Viewer } from './viewer'

type ExposureWay = typeof exposureWay.enumValues[number]

export interface RecordExposure {
  readonly studyId: StudyId
  readonly viewer: Viewer
  readonly how: ExposureWay
  /** Id of the allocation list, extract or disclosure. */
  readonly subject: string
}

/**
 * Notes that somebody now knows allocation or arm-level figures. It is permanent: the first time of each way
 * is kept and enters the record; later ones change nothing. Call it in the transaction that shows them.
 */
export async function recordExposure(tx: Transaction, { studyId, viewer, how, subject }: RecordExposure): Promise<void> {
  const begun = await tx.insert(exposure).values({ id: newId(), studyId, personId: viewer.person.id, how, subject })
    .onConflictDoNothing().returning({ id: exposure.id })
  if (begun.length === 0) return
  await appendRecord(tx, {
    chain: { studyId }, actor: actorOf(viewer), action: 'exposure.began', subject: viewer.person.id, detail: { how, through: subject },
  })
}

/** Who was unblinded, when, how, why and by whom: each exposure with the clearance in force when it began. */
export async function listExposures(db: Queryable, { studyId }: { studyId: StudyId }) {
  const granted = sql`(select json_build_object('reason', c.reason, 'grantedBy', json_build_object('id', g.id, 'name', g.name))
    from clearance c join person g on g.id = c.granted_by
    where c.study_id = ${exposure.studyId} and c.person_id = ${exposure.personId}
      and c.granted_at <= ${exposure.since} and (c.ended_at is null or c.ended_at >= ${exposure.since})
    order by c.granted_at desc limit 1)`
  const exposures = await db.select({
    person: { id: person.id, name: person.name },
    how: exposure.how,
    since: exposure.since,
    clearance: sql<{ reason: string, grantedBy: { id: string, name: string } } | null>`${granted}`,
  }).from(exposure).innerJoin(person, eq(person.id, exposure.personId))
    .where(and(eq(exposure.studyId, studyId))).orderBy(asc(exposure.since), asc(exposure.id))
  return { exposures }
}
