import { randomBytes } from 'node:crypto'
import { and, asc, eq, gt, sql } from 'drizzle-orm'
import { detailHash, entryHash, fieldCommitment, NO_PREVIOUS, RECORD_FORMAT, type DetailValue, type EntryActor, type EntryHead } from '../../shared/record/entry'
import { inclusionProof, treeRoot } from '../../shared/record/merkle'
import { verifyChain, type ChainVerdict, type RecordEntry } from '../../shared/record/verifyChain'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable, Transaction } from '../database/client'
import { onlyRow } from '../database/onlyRow'
import { chainHead, recordEntry, type StoredField } from '../database/schema/record'

/** Who acted, as they were then. */
export interface Actor extends EntryActor {
  readonly requestId: string | null
  readonly origin: string | null
}

/** What no person did: the judge, a job. */
export const SYSTEM: Actor = { personId: null, name: null, roles: [], requestId: null, origin: null }

export type Chain = 'installation' | { readonly studyId: StudyId }

/** A value that depends on arms: kept in full, read by cleared members only. */
class Masked {
  constructor(readonly value: DetailValue) {}
}
export const masked = (value: DetailValue): Masked => new Masked(value)

export interface NewEntry {
  readonly chain: Chain
  readonly actor: Actor
  readonly action: string
  readonly subject: string
  readonly detail: Readonly<Record<string, DetailValue | Masked>>
}

const nameOf = (chain: Chain): string => chain === 'installation' ? chain : chain.studyId

function salted(detail: NewEntry['detail']): Record<string, StoredField> {
  return Object.fromEntries(Object.entries(detail).map(([field, given]) => {
    const salt = randomBytes(16).toString('hex')
    return [field, given instanceof Masked ? { salt, value: normal(given.value), armDependent: true } : { salt, value: normal(given) }]
  }))
}

const normal = (value: DetailValue): DetailValue => typeof value === 'string' ? value.normalize('NFC') : value

/** Locks the chain's head, made on first use, and reads the database's clock. */
async function lockHead(tx: Transaction, chain: string) {
  await tx.insert(chainHead).values({ chain, seq: 0, hash: NO_PREVIOUS, time: new Date(0) }).onConflictDoNothing()
  const head = onlyRow(await tx.select().from(chainHead).where(eq(chainHead.chain, chain)).for('update'))
  const { now } = onlyRow(await tx.execute<{ now: string }>(sql`select date_trunc('milliseconds', clock_timestamp()) as now`))
  return { head, now: new Date(now) }
}

/**
 * Appends one entry; the last statement of the transaction that it reports, so that the chain's head is locked
 * only for a moment. A clock that stood before the previous entry is noted, not corrected.
 */
export async function appendRecord(tx: Transaction, { chain, actor: { requestId, origin, ...who }, action, subject, detail: given }: NewEntry): Promise<{ seq: number, hash: string }> {
  const detail = salted(given)
  const { head: before, now } = await lockHead(tx, nameOf(chain))
  const head: EntryHead = {
    chain: nameOf(chain), seq: before.seq + 1, format: RECORD_FORMAT, time: now.toISOString(), clockStepBack: now < before.time,
    actor: { personId: who.personId, name: who.name?.normalize('NFC') ?? null, roles: [...who.roles] },
    requestId, origin, action, subject,
    detailHash: detailHash(Object.entries(detail).map(([field, { salt, value }]) => fieldCommitment(field, { salt, value }))),
    previousHash: before.hash,
  }
  const hash = entryHash(head)
  await tx.insert(recordEntry).values({ ...head, time: now, hash, detail })
  await tx.update(chainHead).set({ seq: head.seq, hash, time: now }).where(eq(chainHead.chain, head.chain))
  return { seq: head.seq, hash }
}

type EntryRow = typeof recordEntry.$inferSelect

const headOf = (row: EntryRow): EntryHead => ({
  chain: row.chain, seq: row.seq, format: RECORD_FORMAT, time: row.time.toISOString(), clockStepBack: row.clockStepBack,
  actor: { personId: row.actor.personId, name: row.actor.name, roles: row.actor.roles },
  requestId: row.requestId, origin: row.origin, action: row.action, subject: row.subject,
  detailHash: row.detailHash, previousHash: row.previousHash,
})

/** An entry as one reader may have it: of a masked field the commitment alone, which still verifies. */
function readable(row: EntryRow, cleared: boolean): RecordEntry {
  const detail = Object.fromEntries(Object.entries(row.detail).map(([field, { salt, value, armDependent }]) => [
    field, armDependent && !cleared ? { commitment: fieldCommitment(field, { salt, value }) } : { salt, value },
  ]))
  return { head: headOf(row), hash: row.hash, detail }
}

export interface ReadRecord {
  readonly chain: Chain
  /** Arm-dependent fields are given to cleared readers only. */
  readonly cleared: boolean
  readonly after: number
  readonly limit: number
}

/** Entries after a sequence number, oldest first. */
export async function readRecord(db: Queryable, { chain, cleared, after, limit }: ReadRecord): Promise<RecordEntry[]> {
  const rows = await db.select().from(recordEntry)
    .where(and(eq(recordEntry.chain, nameOf(chain)), gt(recordEntry.seq, after))).orderBy(asc(recordEntry.seq)).limit(limit)
  return rows.map(row => readable(row, cleared))
}

async function leaves(db: Queryable, chain: Chain, size?: number): Promise<string[]> {
  const rows = await db.select({ seq: recordEntry.seq, hash: recordEntry.hash }).from(recordEntry)
    .where(eq(recordEntry.chain, nameOf(chain))).orderBy(asc(recordEntry.seq))
  return rows.slice(0, size).map(({ hash }) => hash)
}

export interface TreeHead { readonly size: number, readonly root: string }

/** Size and Merkle root of a chain, now or when it had `size` entries. */
export async function treeHead(db: Queryable, chain: Chain, size?: number): Promise<TreeHead> {
  const hashes = await leaves(db, chain, size)
  return { size: hashes.length, root: treeRoot(hashes) }
}

/** Proof that entry `seq` lies in the tree of the first `size` entries. */
export async function entryProof(db: Queryable, chain: Chain, { seq, size }: { seq: number, size: number }): Promise<string[]> {
  return inclusionProof(await leaves(db, chain, size), seq - 1)
}

/** Recomputes every hash of a chain as it is stored. */
export async function verifyStoredChain(db: Queryable, chain: Chain): Promise<ChainVerdict & { readonly root: string }> {
  const rows = await db.select().from(recordEntry).where(eq(recordEntry.chain, nameOf(chain))).orderBy(asc(recordEntry.seq))
  return { ...verifyChain(nameOf(chain), rows.map(row => readable(row, true))), root: treeRoot(rows.map(({ hash }) => hash)) }
}
