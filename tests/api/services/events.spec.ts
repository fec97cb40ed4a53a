import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import type { DeviationId, ExtractId, MemoId } from '#shared/schemas/domainIds'
import { deviation, memo } from '../../../server/database/schema/deviation'
import { study } from '../../../server/database/schema/study'
import { acknowledge } from '../../../server/services/acknowledgements'
import { breakBlind, fixMethod, listEvents, lockDatabase, unlockDatabase } from '../../../server/services/events'
import { withdrawExtract } from '../../../server/services/extracts'
import { readLedger } from '../../../server/services/ledger'
import { readMemo, signMemo } from '../../../server/services/memos'
import { previewRelease, signRelease } from '../../../server/services/releases'
import { settle } from '../../../server/services/settlements'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { allocate, refusalOf, serviceStudy, uploadAndJudge, type Part, type ServiceStudy } from '../../helpers/serviceStudy'
import { openLabelFile, trialAllocation, trialFile, trialPlan } from '../../helpers/trial'

let database: TestDatabase
let own: ServiceStudy

beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())
beforeEach(async () => {
  own = await serviceStudy(database.db)
})

const signing = async (part: Part, reason: string | null = null) => ({ studyId: own.studyId, reason, ...await own.signing(part) })
const lock = async (extractId: ExtractId) => lockDatabase(database.db, { extractId, ...await signing('dataManager') })
const lastCut = (content = trialFile()) => uploadAndJudge(own, content, { purpose: 'database-lock', cutOff: '2026-06-11' })

async function release(extractId: ExtractId) {
  const { hash } = await previewRelease(database.db, { studyId: own.studyId, extractId, viewer: await own.as('cleared') })
  await signRelease(database.db, { studyId: own.studyId, extractId, hash, ...await own.signing('cleared') })
}

describe('database locked', () => {
  it('names the extract whose verdicts bind from then on; an unlock supersedes it', async () => {
    await allocate(own, trialAllocation('even'))
    const extractId = await lastCut()
    expect(await lock(extractId)).toMatchObject({ kind: 'database-locked', extract: { id: extractId, number: 1 }, signature: { meaning: 'database-locked', name: 'Test dataManager' } })
    expect((await readLedger(database.db, { studyId: own.studyId })).columns).toMatchObject([{ title: 'Database lock', binding: true }])
    expect(await refusalOf(lock(extractId))).toMatchObject({ code: 'already-done' })
    expect(await refusalOf(withdrawExtract(database.db, { extractId, ...await signing('dataManager'), reason: 'No.' }))).toMatchObject({ code: 'wrong-state' })
    await unlockDatabase(database.db, { ...await signing('dataManager'), reason: 'A correction came in.' })
    expect((await readLedger(database.db, { studyId: own.studyId })).columns).toMatchObject([{ binding: false }])
    expect(await refusalOf(unlockDatabase(database.db, { ...await signing('dataManager'), reason: 'Again.' }))).toMatchObject({ code: 'wrong-state' })
    const { events } = await listEvents(database.db, { studyId: own.studyId })
    expect(events.map(({ kind, reason }) => [kind, reason])).toEqual([['database-locked', null], ['database-unlocked', 'A correction came in.']])
  })

  it('waits for the decision point, the judge, every query and the allocation list', async () => {
    const look = await uploadAndJudge(own, trialFile())
    expect(await refusalOf(lock(look))).toMatchObject({ code: 'wrong-state', errors: [{ pointer: '/extractId', code: 'not-at-decision-point' }] })
    const open = await lastCut(trialFile({ week8: { 4: '120' } }))
    expect(await refusalOf(lock(open))).toMatchObject({ code: 'queries-open', errors: [{ params: { count: 2 } }] })
    const withheld = await lastCut()
    expect(await refusalOf(lock(withheld))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'allocation-missing' }] })
    await allocate(own, trialAllocation('even'), [withheld])
    await allocate(own, trialAllocation('spread'))
    expect(await refusalOf(lock(withheld))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'being-judged' }] })
    const other = await serviceStudy(database.db)
    expect(await refusalOf(lockDatabase(database.db, { extractId: withheld, studyId: other.studyId, reason: null, ...await other.signing('dataManager') }))).toMatchObject({ code: 'not-found' })
  })

  it('needs no allocation list in an open-label study', async () => {
    own = await serviceStudy(database.db, number => trialPlan(number, { blinding: 'open-label' }))
    expect(await lock(await lastCut(openLabelFile('even')))).toMatchObject({ kind: 'database-locked' })
  })
})

describe('method fixed', () => {
  it('waits for the lock, the release, the settlement and its signed memo', async () => {
    const fix = async () => fixMethod(database.db, await signing('biostatistician'))
    await allocate(own, trialAllocation('spread'))
    const extractId = await lastCut()
    expect(await refusalOf(fix())).toMatchObject({ code: 'wrong-state', errors: [{ code: 'database-not-locked' }] })
    await lock(extractId)
    expect(await refusalOf(fix())).toMatchObject({ code: 'wrong-state', errors: [{ code: 'verdict-not-released', params: { analysis: 'PAIN-T' } }] })
    await release(extractId)
    expect(await refusalOf(fix())).toMatchObject({ code: 'wrong-state', errors: [{ code: 'deviation-not-settled', params: { analysis: 'PAIN-T' } }] })

    const [opened] = await database.db.select().from(deviation).where(eq(deviation.studyId, own.studyId))
    const at = { studyId: own.studyId, deviationId: opened!.id as DeviationId }
    await settle(database.db, { ...at, kind: 'accept-step', note: 'As registered.', ...await own.signing('biostatistician') })
    expect(await refusalOf(fix())).toMatchObject({ errors: [{ code: 'deviation-not-settled' }] })
    await acknowledge(database.db, { ...at, decision: 'acknowledged', comment: null, ...await own.signing('investigator') })
    const [written] = await database.db.select().from(memo).where(eq(memo.studyId, own.studyId))
    const memoAt = { studyId: own.studyId, memoId: written!.id as MemoId }
    const { contentHash } = await readMemo(database.db, memoAt)
    await signMemo(database.db, { ...memoAt, contentHash, ...await own.signing('biostatistician') })

    expect(await fix()).toMatchObject({ kind: 'method-fixed', extract: { id: extractId } })
    expect(await refusalOf(fix())).toMatchObject({ code: 'already-done' })
    expect(await refusalOf(unlockDatabase(database.db, { ...await signing('dataManager'), reason: 'Too late.' }))).toMatchObject({ errors: [{ code: 'method-is-fixed' }] })
  })

  it('needs no memo where every planned method stands', async () => {
    await allocate(own, trialAllocation('even'))
    const extractId = await lastCut()
    await lock(extractId)
    await release(extractId)
    expect(await fixMethod(database.db, await signing('biostatistician'))).toMatchObject({ kind: 'method-fixed' })
  })
})

describe('blind broken', () => {
  it('needs a reason before the method is fixed, happens once, and opens the study', async () => {
    await allocate(own, trialAllocation('spread'))
    const extractId = await lastCut()
    expect(await refusalOf(breakBlind(database.db, await signing('cleared')))).toMatchObject({ code: 'invalid-input', errors: [{ pointer: '/reason', code: 'required' }] })
    await breakBlind(database.db, await signing('cleared', 'A safety signal.'))
    const [row] = await database.db.select().from(study).where(eq(study.id, own.studyId))
    expect(row?.blindBrokenAt).toBeInstanceOf(Date)
    expect(await refusalOf(breakBlind(database.db, await signing('cleared', 'Again.')))).toMatchObject({ code: 'already-done' })
    const { columns, rows } = await readLedger(database.db, { studyId: own.studyId })
    expect(columns[0]?.extractId).toBe(extractId)
    expect(rows[0]?.cells[0]).toMatchObject({ verdict: { word: 'fallback-applies' }, stepLabel: expect.stringContaining('Welch') })
  })

  it('has no place in an open-label study, and nothing happens without the right password', async () => {
    expect(await refusalOf(breakBlind(database.db, { ...await signing('cleared', 'A signal.'), password: 'wrong' }))).toMatchObject({ code: 'signature-refused' })
    expect((await listEvents(database.db, { studyId: own.studyId })).events).toEqual([])
    own = await serviceStudy(database.db, number => trialPlan(number, { blinding: 'open-label' }))
    expect(await refusalOf(breakBlind(database.db, await signing('cleared', 'A signal.')))).toMatchObject({ code: 'wrong-state' })
  })
})
