import { execFileSync } from 'node:child_process'
import { createHash } from 'node:crypto'
import { mkdtemp, rm, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { canonicalBytes, sha256 } from '#shared/record/canonical'
import { verifyInclusion } from '#shared/record/merkle'
import type { DeviationId, ExtractId, MemoId } from '#shared/schemas/domainIds'
import { deviation, memo } from '../../../server/database/schema/deviation'
import { study } from '../../../server/database/schema/study'
import { ensureMemoKeys, readMemoKeys } from '../../../server/memo/keys'
import { acknowledge } from '../../../server/services/acknowledgements'
import { lockDatabase } from '../../../server/services/events'
import { makeMemoFile, readMemoFile } from '../../../server/services/memoFiles'
import { listMemos, readMemo, signMemo } from '../../../server/services/memos'
import { treeHead, verifyStoredChain } from '../../../server/services/record'
import { previewRelease, signRelease } from '../../../server/services/releases'
import { settle } from '../../../server/services/settlements'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { allocate, refusalOf, serviceStudy, uploadAndJudge, type Part, type ServiceStudy } from '../../helpers/serviceStudy'
import { trialAllocation, trialFile } from '../../helpers/trial'

let database: TestDatabase
let keysFolder: string
const keys = () => readMemoKeys(join(keysFolder, 'keys'))
const LATER = () => new Date(Date.now() + 11 * 24 * 3600 * 1000)

beforeAll(async () => {
  database = await freshDatabase()
  keysFolder = await mkdtemp(join(tmpdir(), 'stipule-memo-'))
  await ensureMemoKeys(keysFolder)
})
afterAll(async () => {
  await database.drop()
  await rm(keysFolder, { recursive: true })
})

interface Settled extends ServiceStudy { readonly memoAt: { readonly studyId: ServiceStudy['studyId'], readonly memoId: MemoId }, readonly deviationId: DeviationId, readonly extractId: ExtractId }

/** The locked extract's fallback, released and settled: a binding memo that awaits its signature. */
async function settled(): Promise<Settled> {
  const own = await serviceStudy(database.db)
  const { studyId, as, signing } = own
  const extractId = await uploadAndJudge(own, trialFile(), { purpose: 'database-lock', cutOff: '2026-06-11' })
  await allocate(own, trialAllocation('spread'), [extractId])
  await lockDatabase(database.db, { studyId, extractId, reason: null, ...await signing('dataManager') })
  const { hash } = await previewRelease(database.db, { studyId, extractId, viewer: await as('cleared') })
  await signRelease(database.db, { studyId, extractId, hash, ...await signing('cleared') })
  const [opened] = await database.db.select().from(deviation).where(eq(deviation.studyId, studyId))
  const deviationId = opened?.id ?? ('' as DeviationId)
  await settle(database.db, { studyId, deviationId, kind: 'accept-step', note: 'As registered.', ...await signing('biostatistician') })
  const [made] = await database.db.select().from(memo).where(eq(memo.studyId, studyId))
  return { ...own, extractId, deviationId, memoAt: { studyId, memoId: made?.id ?? ('' as MemoId) } }
}

const acknowledged = async ({ studyId, deviationId, signing }: Settled) =>
  acknowledge(database.db, { studyId, deviationId, decision: 'acknowledged', comment: null, ...await signing('investigator') })

async function signAs({ memoAt, signing }: Settled, part: Part, { contentHash = null as string | null, now = new Date() } = {}) {
  const hash = contentHash ?? (await readMemo(database.db, memoAt, now)).contentHash
  return signMemo(database.db, { ...memoAt, contentHash: hash, ...await signing(part) }, now)
}

const stored = async ({ memoAt: { memoId } }: Settled) => (await database.db.select().from(memo).where(eq(memo.id, memoId)))[0]

async function issued(): Promise<Settled> {
  const own = await settled()
  await acknowledged(own)
  await signAs(own, 'biostatistician')
  await makeMemoFile(database.db, own.memoAt, keys)
  return own
}

describe('content of a memo', () => {
  it('says what was registered, judged, released, settled, and who was told', async () => {
    const own = await settled()
    const { content, ...summary } = await readMemo(database.db, own.memoAt)
    expect(summary).toMatchObject({ number: 1, edition: 'blinded', deviationClass: 'foreseen-switch', binding: true, state: 'awaiting-signature', acknowledgementAwaited: true, signatures: [] })
    expect(summary.contentHash).toBe(sha256(canonicalBytes(content)))
    expect(content).toMatchObject({
      format: 'stipule-memo/1', contrast: 'none-computed', analysis: { registered: own.document?.analyses[0] },
      plan: { version: 1 }, extract: { number: 1, standing: 'decision-point', subjects: 40, uploadedBy: 'Test dataManager' },
      verdict: { word: 'fallback-applies', step: 'WELCH', releasedBy: 'Test cleared' }, blinding: { atVerdict: 'blind-holds', atSettlement: 'blind-holds' },
      acknowledgement: { state: 'awaited', asked: ['Test investigator'] }, settlement: { kind: 'accept-step', note: 'As registered.', signature: { name: 'Test biostatistician', meaning: 'settled' }, second: null },
      course: [{ verdict: { word: 'fallback-applies' }, binding: true }], unscheduledLooks: [],
    })
  })

  it('proves where the last signature stands in the record', async () => {
    const own = await settled()
    const { content: { record: { entry, treeHead: head, inclusionProof } } } = await readMemo(database.db, own.memoAt)
    expect(await treeHead(database.db, own, head.size)).toEqual(head)
    const proof = { leaf: entry.hash, index: entry.sequence - 1, size: head.size, proof: inclusionProof, root: head.root }
    expect(verifyInclusion(proof)).toBe(true)
    expect(verifyInclusion({ ...proof, index: entry.sequence - 2 })).toBe(false)
    expect(await verifyStoredChain(database.db, own)).toMatchObject({ fault: null })
  })

  it('carries nothing that rests on arms but released words, also after the blind is broken', async () => {
    const own = await settled()
    const blinded = async () => (await readMemo(database.db, own.memoAt)).content
    const before = await blinded()
    await database.db.update(study).set({ blindBrokenAt: new Date() }).where(eq(study.id, own.studyId))
    for (const content of [before, await blinded()]) {
      expect(content.judged).toMatchObject({ byArm: null, plot: null, released: true })
      for (const prerequisite of [...content.judged.prerequisites, ...content.judged.steps.flatMap(step => step.prerequisites)]) {
        if (prerequisite.dependsOnArms) expect([prerequisite.samples, prerequisite.figures]).toEqual([[], []])
      }
    }
  })

  it('is renewed by an answer, and says so when none came in time', async () => {
    const own = await settled()
    const [asked, late] = [await readMemo(database.db, own.memoAt), await readMemo(database.db, own.memoAt, LATER())]
    expect(late.content.acknowledgement.state).toBe('outstanding')
    await acknowledged(own)
    const answered = await readMemo(database.db, own.memoAt)
    expect(answered.content.acknowledgement).toMatchObject({ state: 'acknowledged', signature: { name: 'Test investigator' } })
    expect(answered.content.record.entry.sequence).toBeGreaterThan(asked.content.record.entry.sequence)
    expect(new Set([asked, late, answered].map(({ contentHash }) => contentHash)).size).toBe(3)
  })
})

describe('signature of a memo', () => {
  it('waits for the answer or for the days allowed', async () => {
    const own = await settled()
    expect(await refusalOf(signAs(own, 'biostatistician'))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'acknowledgement-awaited' }] })
    expect(await signAs(own, 'biostatistician', { now: LATER() })).toMatchObject({ state: 'rendering' })
  })

  it('is the settler\'s, over the content that was read', async () => {
    const own = await settled()
    const { contentHash } = await readMemo(database.db, own.memoAt)
    await acknowledged(own)
    expect(await refusalOf(signAs(own, 'second'))).toMatchObject({ code: 'not-permitted', errors: [{ code: 'not-the-settler' }] })
    expect(await refusalOf(signAs(own, 'biostatistician', { contentHash }))).toMatchObject({ code: 'revision-changed' })
    const signed = await signAs(own, 'biostatistician')
    expect(signed.signatures).toEqual([expect.objectContaining({ meaning: 'memo-signed', hash: signed.contentHash, status: 'valid' })])
    expect(await refusalOf(signAs(own, 'biostatistician'))).toMatchObject({ code: 'already-done' })
    const jobs = await database.db.execute(sql`select id from pgboss.job where name = 'memo' and data ->> 'memoId' = ${own.memoAt.memoId}`)
    expect([...jobs]).toHaveLength(1)
    expect((await database.db.select().from(deviation).where(eq(deviation.id, own.deviationId)))[0]?.state).toBe('memo-signed')
  })

  it('fixes the content for good', async () => {
    const own = await issued()
    const row = await stored(own)
    expect(sha256(row?.content ?? new Uint8Array())).toBe(row?.contentHash)
    expect((await readMemo(database.db, own.memoAt, LATER())).contentHash).toBe(row?.contentHash)
  })
})

describe('file of a memo', () => {
  it('is issued once, signed, kept under its hash, and the monitors are told', async () => {
    const own = await issued()
    const row = await stored(own)
    const { bytes } = await readMemoFile(database.db, own.memoAt)
    expect(createHash('sha256').update(bytes).digest('hex')).toBe(row?.pdfHash)
    const path = join(keysFolder, `${own.memoAt.memoId}.pdf`)
    await writeFile(path, bytes)
    expect(execFileSync('pdfsig', [path], { encoding: 'utf8' })).toMatch(/Total document signed[\s\S]*Signature is Valid/)
    expect(execFileSync('pdftotext', ['-layout', path, '-'], { encoding: 'utf8' })).toContain(row?.contentHash)
    const mails = await database.db.execute<{ data: unknown }>(sql`select data from pgboss.job where name = 'mail' and data ->> 'memoId' = ${own.memoAt.memoId}`)
    expect([...mails].map(({ data }) => data)).toEqual([expect.objectContaining({ kind: 'memo-issued', to: own.people.monitor.id })])

    await makeMemoFile(database.db, own.memoAt, keys)
    expect(await stored(own)).toEqual(row)
    expect((await listMemos(database.db, own)).memos).toMatchObject([{ state: 'issued', pdfHash: row?.pdfHash }])
  })

  it('says when it could not be made, and is made at the next attempt', async () => {
    const own = await settled()
    await acknowledged(own)
    expect(await refusalOf(readMemoFile(database.db, own.memoAt))).toMatchObject({ code: 'wrong-state' })
    await signAs(own, 'biostatistician')
    await expect(makeMemoFile(database.db, own.memoAt, () => Promise.reject(new Error('no key')))).rejects.toThrow('no key')
    expect(await stored(own)).toMatchObject({ state: 'failed', pdfBlobId: null })
    await makeMemoFile(database.db, own.memoAt, keys)
    expect(await stored(own)).toMatchObject({ state: 'issued' })
  })

  it('is another study\'s to nobody', async () => {
    const [own, other] = [await issued(), await serviceStudy(database.db)]
    expect(await refusalOf(readMemoFile(database.db, { studyId: other.studyId, memoId: own.memoAt.memoId }))).toMatchObject({ code: 'not-found' })
  })
})
