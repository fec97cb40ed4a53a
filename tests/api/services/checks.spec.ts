import { asc, eq } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import type { DataQueryId, ExtractId } from '#shared/schemas/domainIds'
import { check, release } from '../../../server/database/schema/check'
import { deviation } from '../../../server/database/schema/deviation'
import { allocation } from '../../../server/database/schema/extract'
import { exposure } from '../../../server/database/schema/member'
import { listAllocations, uploadAllocation } from '../../../server/services/allocations'
import { runCheck } from '../../../server/services/checks'
import { viewExtract } from '../../../server/services/extractViews'
import { withdrawExtract } from '../../../server/services/extracts'
import { resolveQuery } from '../../../server/services/queries'
import { seenReport } from '../../../server/services/releases'
import { standingOf } from '../../../server/services/viewer'
import judgeExtract from '../../../server/workers/judge'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { allocate, judgeNow, refusalOf, serviceStudy, streamOf, upload, uploadAndJudge, type ServiceStudy } from '../../helpers/serviceStudy'
import { openLabelFile, SKEWED, trialAllocation, trialFile, trialPlan } from '../../helpers/trial'

let database: TestDatabase
let own: ServiceStudy

beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())
beforeEach(async () => {
  own = await serviceStudy(database.db)
})

const runs = (extractId: ExtractId) => database.db.select().from(check).where(eq(check.extractId, extractId)).orderBy(asc(check.run))
const verdicts = async (extractId: ExtractId) => {
  const { seen } = await seenReport(database.db, { studyId: own.studyId, extractId })
  return Object.fromEntries(seen.analyses.map(({ analysis, verdict }) => [analysis, verdict.reason ? `${verdict.word}: ${verdict.reason}` : verdict.word]))
}
const view = async (extractId: ExtractId) => viewExtract(database.db, { studyId: own.studyId, extractId, viewer: await own.as('biostatistician') })

describe('a check', () => {
  it('stores one run with the canonical bytes of its report, and none again for the same inputs', async () => {
    const extractId = await uploadAndJudge(own, trialFile())
    await judgeNow(database.db, { studyId: own.studyId, extractId })
    const [only, ...more] = await runs(extractId)
    expect(more).toEqual([])
    const report = JSON.parse(Buffer.from(only!.reportBytes).toString('utf8')) as { extract: { contentHash: string }, engine: string }
    expect(only).toMatchObject({ run: 1, allocationId: null, engine: report.engine })
    expect(await view(extractId)).toMatchObject({ state: 'checked', contentHash: report.extract.contentHash })
  })

  it('tells arm-free verdicts and arm-free causes at once, but enters only the former as released', async () => {
    const extractId = await uploadAndJudge(own, trialFile())
    expect(await verdicts(extractId)).toEqual({ 'PAIN-T': 'not-assessable: allocation-withheld', 'PAIN-P': 'planned-method-stands' })
    const released = await database.db.select().from(release).where(eq(release.extractId, extractId))
    expect(released).toMatchObject([{ analyses: ['PAIN-P'], signatureId: null, releasedBy: null }])
  })

  it('opens a deviation at once for an arm-free verdict other than the planned method', async () => {
    await uploadAndJudge(own, trialFile({ week8: SKEWED }))
    expect(await database.db.select().from(deviation).where(eq(deviation.studyId, own.studyId))).toMatchObject([{ analysis: 'PAIN-P', number: 1, state: 'open' }])
  })

  it('judges once more when something changed while it was judging', async () => {
    const { id } = await upload(own, trialFile())
    const extractId = id as ExtractId
    let calls = 0
    await runCheck(database.db, { studyId: own.studyId, extractId }, async (task) => {
      calls += 1
      if (calls === 1) await allocate(own, trialAllocation('spread'))
      return judgeExtract(task)
    })
    expect(calls).toBe(2)
    const stored = await runs(extractId)
    expect(stored).toHaveLength(1)
    expect(stored[0]?.allocationId).not.toBeNull()
  })

  it('leaves withdrawn extracts alone', async () => {
    const { id } = await upload(own, trialFile())
    const extractId = id as ExtractId
    await withdrawExtract(database.db, { studyId: own.studyId, extractId, reason: 'Wrong cut.', ...await own.signing('dataManager') })
    await judgeNow(database.db, { studyId: own.studyId, extractId })
    expect(await runs(extractId)).toEqual([])
  })

  it('releases every verdict of an open-label study as it is judged', async () => {
    own = await serviceStudy(database.db, number => trialPlan(number, { blinding: 'open-label' }))
    const extractId = await uploadAndJudge(own, openLabelFile('spread'))
    expect(await verdicts(extractId)).toEqual({ 'PAIN-T': 'fallback-applies', 'PAIN-P': 'planned-method-stands' })
    const opened = await database.db.select().from(deviation).where(eq(deviation.studyId, own.studyId))
    expect(opened).toMatchObject([{ analysis: 'PAIN-T' }])
  })
})

describe('an allocation list', () => {
  it('is joined inside the judge; what it decides stays behind the blind', async () => {
    const extractId = await uploadAndJudge(own, trialFile())
    const list = await allocate(own, trialAllocation('spread'), [extractId])
    expect(list).toMatchObject({ state: 'accepted', kind: 'true', subjects: 40, findings: [] })
    expect(await verdicts(extractId)).toEqual({ 'PAIN-T': 'held-behind-the-blind', 'PAIN-P': 'planned-method-stands' })
    expect(await runs(extractId)).toMatchObject([{ run: 1, allocationId: null }, { run: 2, allocationId: list.id }])
    expect(await database.db.select().from(deviation).where(eq(deviation.studyId, own.studyId))).toEqual([])
  })

  it('lies encrypted, under a commitment that is not its hash', async () => {
    const { id, hash } = await allocate(own, trialAllocation('spread'))
    const [row] = await database.db.select().from(allocation).where(eq(allocation.id, id))
    expect(row!.commitment).toMatch(/^[0-9a-f]{64}$/)
    expect(row!.commitment).not.toBe(hash)
    const stored = await database.sql<{ hit: boolean }[]>`select position('T-001'::bytea in bytes) > 0 as hit from blob_chunk where blob_id = ${row!.blobId}`
    expect(stored).toEqual([{ hit: false }])
  })

  it('exposes whoever brings it, and is judged anew when a later one comes', async () => {
    const extractId = await uploadAndJudge(own, trialFile())
    await allocate(own, trialAllocation('spread'), [extractId])
    const newer = await allocate(own, trialAllocation('even'), [extractId])
    expect((await runs(extractId)).at(-1)).toMatchObject({ run: 3, allocationId: newer.id })
    const exposed = await database.db.select().from(exposure).where(eq(exposure.studyId, own.studyId))
    expect(exposed).toMatchObject([{ personId: own.people.cleared.id, how: 'allocation' }])
    expect(await standingOf(database.db, own.people.cleared.id, own.studyId)).toMatchObject({ exposed: true })
  })

  it.each([
    ['an unknown arm', trialAllocation('even').replace('T-003,PBO', 'T-003,PLC'), 'unknown-arm', 4],
    ['a subject twice', `${trialAllocation('even')}T-001,ACT\n`, 'subject-twice', 42],
    ['nothing', '', 'empty-file', null],
  ])('is refused and kept for %s, and nothing is judged with it', async (_, content, code, row) => {
    const extractId = await uploadAndJudge(own, trialFile())
    const refused = await allocate(own, content, [extractId])
    expect(refused).toMatchObject({ state: 'refused', subjects: 0, findings: [{ code, row }] })
    expect(await verdicts(extractId)).toMatchObject({ 'PAIN-T': 'not-assessable: allocation-withheld' })
    const { allocations } = await listAllocations(database.db, { studyId: own.studyId, viewer: await own.as('cleared') })
    expect(allocations.map(({ state }) => state)).toEqual(['refused'])
  })

  it('does not come from whoever uploads extracts or settles, nor into a study that has no place for it', async () => {
    await upload(own, trialFile())
    const bring = async (study: ServiceStudy, part: 'dataManager' | 'cleared') =>
      uploadAllocation(database.db, { studyId: study.studyId, kind: 'true', source: streamOf(trialAllocation('even')), viewer: await study.as(part) })
    expect(await refusalOf(bring(own, 'dataManager'))).toMatchObject({ code: 'separation-of-duties', errors: [{ params: { earlier: 'extract.upload' } }] })
    expect(await refusalOf(bring(await serviceStudy(database.db, null), 'cleared'))).toMatchObject({ code: 'plan-not-signed' })
    const open = await serviceStudy(database.db, number => trialPlan(number, { blinding: 'open-label' }))
    expect(await refusalOf(bring(open, 'cleared'))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'study-open-label' }] })
  })

  it('for practice is refused with a clear reason', async () => {
    const practice = uploadAllocation(database.db, { studyId: own.studyId, kind: 'dummy', source: streamOf(trialAllocation('even')), viewer: await own.as('cleared') })
    expect(await refusalOf(practice)).toMatchObject({ code: 'invalid-input', errors: [{ pointer: '/query/kind', code: 'practice-lists-not-taken' }] })
  })
})

describe('a held screen', () => {
  const impossible = trialFile({ week8: { 4: '120' } })
  const resolve = async (extractId: ExtractId, queryId: string, part: 'biostatistician' | 'dataManager', decision: 'cleared' | 'overruled' = 'cleared') =>
    resolveQuery(database.db, { studyId: own.studyId, extractId, queryId: queryId as DataQueryId, decision, note: 'Confirmed by the site.', ...await own.signing(part) })

  it('opens a numbered query per endpoint, names rows, and holds the analyses it touches', async () => {
    const extractId = await uploadAndJudge(own, impossible)
    const { queries, findingList, findings } = await view(extractId)
    expect(queries).toMatchObject([
      { number: 1, screen: 'impossible-value', endpoint: 'PAIN', state: 'open', rows: [11], count: 1, resolution: null },
      { number: 2, screen: 'impossible-value', endpoint: 'PAIN-RAW', state: 'open', rows: [13], count: 1 },
    ])
    expect(findings).toEqual({ refuse: 0, hold: 2, warn: 2 })
    expect(findingList).toMatchObject([{ severity: 'hold', code: 'impossible-value', row: 11, column: 'AVAL' }, { row: 13 }, { severity: 'warn', code: 'implausible-value', row: 11 }, { row: 13 }])
    expect(await verdicts(extractId)).toEqual({ 'PAIN-T': 'not-assessable: data-query-open', 'PAIN-P': 'not-assessable: data-query-open' })
  })

  it('is settled in writing by a biostatistician who did not upload; the extract is judged again', async () => {
    const extractId = await uploadAndJudge(own, impossible)
    const [, second] = (await view(extractId)).queries
    expect(await refusalOf(resolve(extractId, second!.id, 'dataManager'))).toMatchObject({ code: 'separation-of-duties' })
    const resolved = await resolve(extractId, second!.id, 'biostatistician')
    expect(resolved.queries[1]).toMatchObject({ state: 'cleared', resolution: { note: 'Confirmed by the site.', signature: { meaning: 'query-cleared' } } })
    await judgeNow(database.db, { studyId: own.studyId, extractId })
    expect(await verdicts(extractId)).toMatchObject({ 'PAIN-T': 'not-assessable: data-query-open', 'PAIN-P': 'no-registered-method' })
    expect(await refusalOf(resolve(extractId, second!.id, 'biostatistician', 'overruled'))).toMatchObject({ code: 'already-done' })
  })

  it('does not let two values under one key be talked away', async () => {
    const [header, first, ...rest] = trialFile().split('\n')
    const extractId = await uploadAndJudge(own, [header, first, first, ...rest].join('\n'))
    const [query] = (await view(extractId)).queries
    expect(query).toMatchObject({ screen: 'duplicate-key', rows: [2, 3] })
    expect(await refusalOf(resolve(extractId, query!.id, 'biostatistician'))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'duplicate-key-stays' }] })
  })

  it('holds where the unit is not the registered one or no column states it', async () => {
    const extractId = await uploadAndJudge(own, trialFile({ unit: 'cm' }))
    expect((await view(extractId)).queries.map(({ screen, count }) => [screen, count])).toEqual([['wrong-unit', 40], ['wrong-unit', 80]])
  })
})
