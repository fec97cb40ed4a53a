import { and, asc, eq, max } from 'drizzle-orm'
import type { MemoContent } from '../../shared/memo/content'
import { canonicalBytes, sha256 } from '../../shared/record/canonical'
import type { MemoId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { deviation, memo, settlement } from '../database/schema/deviation'
import { DomainError } from '../domainError'
import { enqueue } from '../jobs/enqueue'
import { deviationFacts } from './deviationFacts'
import { composeMemo } from './memoContent'
import { notify } from './notices'
import { appendRecord } from './record'
import { sign, signaturesOver, type Credentials } from './signatures'
import { actorOf, type Viewer } from './viewer'

export interface MemoAddress { readonly studyId: StudyId, readonly memoId: MemoId }

interface MemoFacts {
  readonly row: typeof memo.$inferSelect
  readonly deviation: typeof deviation.$inferSelect
  readonly settlement: typeof settlement.$inferSelect
}

interface Composed { readonly content: MemoContent, readonly bytes: Uint8Array, readonly hash: string }

const withSettlement = (db: Queryable) => db.select({ row: memo, deviation, settlement }).from(memo)
  .innerJoin(deviation, eq(deviation.id, memo.deviationId))
  .innerJoin(settlement, eq(settlement.id, memo.settlementId))

/** Content of a memo that is not signed yet, as it would be signed at this moment. */
async function compose(db: Queryable, { deviation: { studyId, id }, settlement: row }: Omit<MemoFacts, 'row'>, number: number, now: Date): Promise<Composed> {
  const facts = await deviationFacts(db, { studyId, deviationId: id }, row.checkId)
  const content = await composeMemo(db, { facts, settlement: row, number, now })
  const bytes = canonicalBytes(content)
  return { content, bytes, hash: sha256(bytes) }
}

/** What was signed, or what would be signed now. */
async function contentOf(db: Queryable, facts: MemoFacts, now: Date): Promise<Composed> {
  const { row } = facts
  if (row.state === 'awaiting-signature') return compose(db, facts, row.number, now)
  return { content: JSON.parse(Buffer.from(row.content).toString('utf8')) as MemoContent, bytes: row.content, hash: row.contentHash }
}

async function summaryOf(db: Queryable, { row, deviation: { id, number, analysis } }: MemoFacts, { content, hash }: Composed) {
  return {
    id: row.id,
    number: row.number,
    deviation: { id, number },
    analysis: content.analysis.registered.label || analysis,
    edition: content.edition,
    deviationClass: content.deviationClass,
    binding: content.binding,
    state: row.state,
    contentHash: hash,
    pdfHash: row.pdfHash,
    issuedAt: row.issuedAt,
    signatures: await signaturesOver(db, { studyId: row.studyId, subject: row.id, hash }),
  }
}

export interface MakeMemo { readonly studyId: StudyId, readonly settlementId: string, readonly viewer: Viewer }

/** The memo of a settlement, to be signed; part of the settling transaction, after its signature is in the record. */
export async function makeMemo(tx: Transaction, { studyId, settlementId, viewer }: MakeMemo): Promise<void> {
  const settled = onlyRow(await tx.select({ settlement, deviation }).from(settlement).innerJoin(deviation, eq(deviation.id, settlement.deviationId))
    .where(and(eq(settlement.studyId, studyId), eq(settlement.id, settlementId))))
  const [last] = await tx.select({ number: max(memo.number) }).from(memo).where(eq(memo.studyId, studyId))
  const number = (last?.number ?? 0) + 1
  const { content, bytes, hash } = await compose(tx, settled, number, new Date())
  const id = newId<MemoId>()
  await tx.insert(memo).values({
    id, studyId, number, deviationId: settled.deviation.id, settlementId, edition: content.edition, deviationClass: content.deviationClass,
    binding: content.binding, state: 'awaiting-signature', content: bytes, contentHash: hash,
  })
  await appendRecord(tx, {
    chain: { studyId }, actor: actorOf(viewer), action: 'memo.made', subject: id, detail: { number, deviation: settled.deviation.number, contentHash: hash },
  })
}

export async function listMemos(db: Queryable, { studyId }: { studyId: StudyId }, now = new Date()) {
  const rows = await withSettlement(db).where(eq(memo.studyId, studyId)).orderBy(asc(memo.number))
  const memos = []
  for (const facts of rows) memos.push(await summaryOf(db, facts, await contentOf(db, facts, now)))
  return { memos }
}

export async function findMemo(db: Queryable, { studyId, memoId }: MemoAddress): Promise<MemoFacts> {
  const [facts] = await withSettlement(db).where(and(eq(memo.studyId, studyId), eq(memo.id, memoId)))
  if (!facts) throw new DomainError('not-found')
  return facts
}

/** What will be signed, or was, with its hash. */
export async function readMemo(db: Queryable, address: MemoAddress, now = new Date()) {
  const facts = await findMemo(db, address)
  const composed = await contentOf(db, facts, now)
  return { ...await summaryOf(db, facts, composed), content: composed.content, acknowledgementAwaited: composed.content.acknowledgement.state === 'awaited' }
}

export interface SignMemo extends MemoAddress, Credentials {
  /** Of the content that was read. */
  readonly contentHash: string
  readonly viewer: Viewer
}

/** The settler signs once the investigator has answered or the days allowed have passed. */
function requireSignable({ row, settlement: { settledBy } }: MemoFacts, { content, hash }: Composed, { contentHash, viewer }: SignMemo): void {
  if (row.state !== 'awaiting-signature') throw new DomainError('already-done')
  if (settledBy !== viewer.person.id) throw new DomainError('not-permitted', [{ code: 'not-the-settler' }])
  const { state, dueAt } = content.acknowledgement
  if (state === 'awaited') throw new DomainError('wrong-state', [{ code: 'acknowledgement-awaited', params: { dueAt } }])
  if (hash !== contentHash) throw new DomainError('revision-changed', [{ pointer: '/contentHash', code: 'content-changed' }])
}

/** The settling biostatistician signs the content; a worker makes the document from it afterwards. */
export async function signMemo(db: Database, request: SignMemo, now = new Date()) {
  const { studyId, memoId, viewer, identifier, password } = request
  return await db.transaction(async (tx) => {
    await tx.select({ id: memo.id }).from(memo).where(and(eq(memo.studyId, studyId), eq(memo.id, memoId))).for('update')
    const facts = await findMemo(tx, { studyId, memoId })
    const composed = await contentOf(tx, facts, now)
    requireSignable(facts, composed, request)
    const { content, bytes, hash } = composed
    const { id: signatureId } = await sign(tx, { studyId, viewer, identifier, password, meaning: 'memo-signed', subject: memoId, hash })
    const row = onlyRow(await tx.update(memo).set({
      state: 'rendering', content: bytes, contentHash: hash, signatureId, edition: content.edition, deviationClass: content.deviationClass, binding: content.binding,
    }).where(eq(memo.id, memoId)).returning())
    await tx.update(deviation).set({ state: 'memo-signed' }).where(and(eq(deviation.id, facts.deviation.id), eq(deviation.state, 'settled')))
    await enqueue(tx, 'memo', { studyId, memoId })
    const summary = await summaryOf(tx, { ...facts, row }, composed)
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'memo.signed', subject: memoId, detail: { number: row.number, contentHash: hash, signature: signatureId },
    })
    await notify(tx, { studyId, kind: 'memo', id: memoId })
    return summary
  })
}
