import { and, desc, eq, inArray, sql } from 'drizzle-orm'
import type { MemoRecord } from '../../shared/memo/content'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { onlyRow } from '../database/onlyRow'
import { recordEntry } from '../database/schema/record'
import { entryProof, treeHead } from './record'

/**
 * Where the last of the given signatures stands in the study's record: its entry, the tree head of the moment
 * after it, and the proof that one lies in the other.
 */
export async function memoRecord(db: Queryable, studyId: StudyId, signatureIds: readonly string[]): Promise<MemoRecord> {
  const signed = sql<string>`${recordEntry.detail} #>> '{signature,value}'`
  const entry = onlyRow(await db.select({ sequence: recordEntry.seq, hash: recordEntry.hash }).from(recordEntry)
    .where(and(eq(recordEntry.chain, studyId), inArray(signed, [...signatureIds]))).orderBy(desc(recordEntry.seq)).limit(1))
  const chain = { studyId }
  return {
    entry,
    treeHead: await treeHead(db, chain, entry.sequence),
    inclusionProof: await entryProof(db, chain, { seq: entry.sequence, size: entry.sequence }),
  }
}
