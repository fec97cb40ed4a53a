import { and, eq, sql } from 'drizzle-orm'
import type { MemoContent } from '../../shared/memo/content'
import { say } from '../../shared/wording/say'
import type { Database, Queryable } from '../database/client'
import { memo } from '../database/schema/deviation'
import { DomainError } from '../domainError'
import type { MemoKeys } from '../memo/keys'
import { renderMemo } from '../memo/render'
import { keepBlob, putBlob, readWholeBlob } from './blobs'
import { enqueueMail } from './mails'
import { findMemo, type MemoAddress } from './memos'
import { membersWithRole } from './membersWithRole'
import { notify } from './notices'
import { printedSignature } from './printedSignatures'
import { appendRecord, SYSTEM } from './record'

async function render(db: Database, { studyId, memoId }: MemoAddress, keys: MemoKeys): Promise<Buffer> {
  const { row } = await findMemo(db, { studyId, memoId })
  if (row.signatureId === null) throw new DomainError('wrong-state')
  const content = JSON.parse(Buffer.from(row.content).toString('utf8')) as MemoContent
  const signature = await printedSignature(db, { studyId, signatureId: row.signatureId })
  return renderMemo({ content, bytes: row.content, signature }, keys, (key, params) => say(content.locale, key, params))
}

/** Puts the finished file beside its memo; the monitors are told in the same transaction. */
async function issue(db: Database, { studyId, memoId }: MemoAddress, pdf: Buffer): Promise<void> {
  await db.transaction(async (tx) => {
    const [row] = await tx.select().from(memo).where(and(eq(memo.studyId, studyId), eq(memo.id, memoId))).for('update')
    if (!row || row.state === 'issued') return
    const { id: pdfBlobId, hash: pdfHash } = await putBlob(tx, pdf)
    await keepBlob(tx, pdfBlobId)
    await tx.update(memo).set({ state: 'issued', pdfBlobId, pdfHash, issuedAt: sql`now()` }).where(eq(memo.id, memoId))
    for (const { id } of await membersWithRole(tx, studyId, 'monitor')) await enqueueMail(tx, { kind: 'memo-issued', to: id, studyId, memoId })
    await appendRecord(tx, { chain: { studyId }, actor: SYSTEM, action: 'memo.issued', subject: memoId, detail: { number: row.number, pdfHash } })
    await notify(tx, { studyId, kind: 'memo', id: memoId })
  })
}

const markFailed = (db: Database, { studyId, memoId }: MemoAddress) => db.update(memo).set({ state: 'failed' })
  .where(and(eq(memo.studyId, studyId), eq(memo.id, memoId), eq(memo.state, 'rendering')))

/**
 * The job `memo`: makes and signs the PDF of a signed memo. Done twice it changes nothing; when it fails the
 * memo says so and the job is tried again.
 */
export async function makeMemoFile(db: Database, address: MemoAddress, keys: () => Promise<MemoKeys>): Promise<void> {
  const { row } = await findMemo(db, address)
  if (row.state === 'issued') return
  try {
    await issue(db, address, await render(db, address, await keys()))
  }
  catch (error) {
    await markFailed(db, address)
    throw error
  }
}

/** The issued file, for download. */
export async function readMemoFile(db: Queryable, address: MemoAddress): Promise<{ bytes: Uint8Array, number: number, protocolNumber: string }> {
  const { row } = await findMemo(db, address)
  if (row.state !== 'issued' || row.pdfBlobId === null) throw new DomainError('wrong-state')
  const content = JSON.parse(Buffer.from(row.content).toString('utf8')) as MemoContent
  return { bytes: await readWholeBlob(db, row.pdfBlobId), number: row.number, protocolNumber: content.study.protocolNumber }
}
