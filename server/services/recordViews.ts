import { eq } from 'drizzle-orm'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { chainHead } from '../database/schema/record'
import { readRecord, verifyStoredChain } from './record'
import type { Viewer } from './viewer'

export interface ListRecord {
  readonly studyId: StudyId
  readonly after: number
  readonly limit: number
  readonly viewer: Viewer
}

/** A page of the study's record as the viewer may read it. */
export async function listRecord(db: Queryable, { studyId, after, limit, viewer: { standing } }: ListRecord) {
  const entries = await readRecord(db, { chain: { studyId }, cleared: standing.cleared || !standing.blindHolds, after, limit })
  const [head] = await db.select({ seq: chainHead.seq }).from(chainHead).where(eq(chainHead.chain, studyId))
  const size = head?.seq ?? 0
  const last = entries.at(-1)?.head.seq ?? after
  return {
    entries: entries.map(({ head: { chain: _chain, format: _format, actor, ...rest }, hash, detail }) => ({ ...rest, actor: { ...actor, roles: [...actor.roles] }, hash, detail })),
    next: last < size ? last : null,
    size,
  }
}

export async function viewIntegrity(db: Queryable, { studyId }: { studyId: StudyId }) {
  const { size, root, fault } = await verifyStoredChain(db, { studyId })
  return { size, root, fault, checkedAt: new Date() }
}
