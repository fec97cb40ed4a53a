import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { DataQueryId, ExtractId } from '#shared/schemas/domainIds'
import { newId } from '../../../server/database/newId'
import { release } from '../../../server/database/schema/check'
import { deviation, settlement } from '../../../server/database/schema/deviation'
import { exposure } from '../../../server/database/schema/member'
import { signature } from '../../../server/database/schema/record'
import { lockDatabase } from '../../../server/services/events'
import { withdrawExtract } from '../../../server/services/extracts'
import { viewExtract } from '../../../server/services/extractViews'
import { resolveQuery } from '../../../server/services/queries'
import { previewRelease, seenReport, signRelease } from '../../../server/services/releases'
import { readArms, readVerdict } from '../../../server/services/verdicts'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { allocate, judgeNow, refusalOf, serviceStudy, uploadAndJudge, type ServiceStudy } from '../../helpers/serviceStudy'
import { openLabelFile, trialAllocation, trialFile, trialPlan } from '../../helpers/trial'

let database: TestDatabase
let own: ServiceStudy

beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

/** A judged first look of a new study, its allocation known to the judge. */
async function judgedLook(kind: 'spread' | 'even' = 'spread', plan: Parameters<typeof trialPlan>[1] = {}, file = trialFile()): Promise<ExtractId> {
  own = await serviceStudy(database.db, number => trialPlan(number, plan))
  const extractId = await uploadAndJudge(own, file)
  await allocate(own, trialAllocation(kind), [extractId])
  return extractId
}

const preview = async (extractId: ExtractId) => previewRelease(database.db, { studyId: own.studyId, extractId, viewer: await own.as('cleared') })
const sign = async (extractId: ExtractId, hash?: string) =>
  signRelease(database.db, { studyId: own.studyId, extractId, hash: hash ?? (await preview(extractId)).hash, ...await own.signing('cleared') })
const verdictOf = async (extractId: ExtractId, analysis: string) =>
  (await seenReport(database.db, { studyId: own.studyId, extractId })).seen.analyses.find(each => each.analysis === analysis)?.verdict
const lock = async (extractId: ExtractId) => lockDatabase(database.db, { studyId: own.studyId, extractId, reason: null, ...await own.signing('dataManager') })

describe('a release', () => {
  it('lets out exactly what the preview showed, and opens deviations with it', async () => {
    const extractId = await judgedLook()
    const before = await preview(extractId)
    expect(before).toMatchObject({ state: 'open', released: null, report: { view: 'blinded' } })
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'held-behind-the-blind' })
    await sign(extractId, before.hash)
    const { seen } = await seenReport(database.db, { studyId: own.studyId, extractId })
    expect(seen).toEqual(before.report)
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'fallback-applies', step: 'WELCH' })
    expect(await database.db.select().from(deviation).where(eq(deviation.studyId, own.studyId))).toMatchObject([{ analysis: 'PAIN-T', state: 'open' }])
    expect(await preview(extractId)).toMatchObject({ state: 'released', released: { signature: { meaning: 'released', name: 'Test cleared', hash: before.hash } } })
  })

  it('opens no deviation where the planned method stands', async () => {
    const extractId = await judgedLook('even')
    await sign(extractId)
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'planned-method-stands' })
    expect(await database.db.select().from(deviation).where(eq(deviation.studyId, own.studyId))).toEqual([])
  })

  it('happens once, over what was seen, and under a signature', async () => {
    const extractId = await judgedLook()
    const { hash } = await preview(extractId)
    expect(await refusalOf(sign(extractId, 'f'.repeat(64)))).toMatchObject({ code: 'wrong-state', errors: [{ pointer: '/hash', code: 'preview-changed' }] })
    const wrong = { ...await own.signing('cleared'), password: 'wrong' }
    expect(await refusalOf(signRelease(database.db, { studyId: own.studyId, extractId, hash, ...wrong }))).toMatchObject({ code: 'signature-refused' })
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'held-behind-the-blind' })
    await sign(extractId, hash)
    expect(await refusalOf(sign(extractId, hash))).toMatchObject({ code: 'already-done' })
  })

  it('is not signed over a run that is out of date', async () => {
    const extractId = await judgedLook()
    const { hash } = await preview(extractId)
    await allocate(own, trialAllocation('even'))
    expect(await preview(extractId)).toMatchObject({ state: 'not-yet' })
    expect(await refusalOf(sign(extractId, hash))).toMatchObject({ code: 'wrong-state' })
    await judgeNow(database.db, { studyId: own.studyId, extractId })
    expect(await refusalOf(sign(extractId, hash))).toMatchObject({ errors: [{ code: 'preview-changed' }] })
  })

  it('exposes whoever previews it: words that are still held stand there', async () => {
    const extractId = await judgedLook()
    await preview(extractId)
    const ways = await database.db.select({ how: exposure.how }).from(exposure).where(eq(exposure.studyId, own.studyId))
    expect(ways.map(({ how }) => how).sort()).toEqual(['allocation', 'arm-level-view'])
  })

  it('is not signed by somebody who settles deviations of the study', async () => {
    const extractId = await judgedLook('spread')
    await sign(extractId)
    const [opened] = await database.db.select().from(deviation).where(eq(deviation.studyId, own.studyId))
    const [any] = await database.db.select().from(signature).where(eq(signature.studyId, own.studyId)).limit(1)
    const [{ checkId } = { checkId: null }] = await database.db.select().from(release).where(eq(release.extractId, extractId))
    await database.db.insert(settlement).values({
      id: newId(), studyId: own.studyId, deviationId: opened!.id, checkId: checkId!, kind: 'keep-under-observation', note: 'Wait.', settledBy: own.people.cleared.id, signatureId: any!.id,
    })
    const second = await uploadAndJudge(own, trialFile({ seed: 8 }), { purpose: 'database-lock', cutOff: '2026-06-11' })
    await lock(second)
    expect(await refusalOf(sign(second))).toMatchObject({ code: 'separation-of-duties', errors: [{ params: { earlier: 'deviation.settle' } }] })
  })
})

describe('the plan\'s release policy', () => {
  it('keeps looks behind the blind where verdicts leave at the decision point only', async () => {
    const extractId = await judgedLook('spread', { release: { armDependent: 'decision-point', namesFailed: false } })
    expect(await preview(extractId)).toMatchObject({ state: 'not-yet' })
    expect(await refusalOf(sign(extractId))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'release-not-yet' }] })
  })

  it.each(['decision-point', 'each-look'] as const)('lets the decision point out after the lock alone (%s)', async (armDependent) => {
    own = await serviceStudy(database.db, number => trialPlan(number, { release: { armDependent, namesFailed: false } }))
    await allocate(own, trialAllocation('spread'))
    const extractId = await uploadAndJudge(own, trialFile(), { purpose: 'database-lock' })
    expect(await preview(extractId)).toMatchObject({ state: 'not-yet' })
    await lock(extractId)
    await sign(extractId)
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'fallback-applies', step: 'WELCH' })
  })

  it('releases nothing of re-cuts, withdrawn extracts and open-label studies', async () => {
    const first = await judgedLook()
    const recut = await uploadAndJudge(own, trialFile({ seed: 9 }))
    expect(await preview(recut)).toMatchObject({ state: 'nothing-to-release' })
    expect(await refusalOf(sign(recut))).toMatchObject({ code: 'wrong-state' })
    await withdrawExtract(database.db, { studyId: own.studyId, extractId: first, reason: 'Wrong cut.', ...await own.signing('dataManager') })
    expect(await preview(first)).toMatchObject({ state: 'nothing-to-release' })
    own = await serviceStudy(database.db, number => trialPlan(number, { blinding: 'open-label' }))
    const open = await uploadAndJudge(own, openLabelFile('spread'))
    expect(await preview(open)).toMatchObject({ state: 'nothing-to-release' })
  })

  it('withdraws what was released with its extract', async () => {
    const extractId = await judgedLook()
    await sign(extractId)
    await withdrawExtract(database.db, { studyId: own.studyId, extractId, reason: 'Wrong cut.', ...await own.signing('dataManager') })
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'held-behind-the-blind' })
    expect(await verdictOf(extractId, 'PAIN-P')).toMatchObject({ word: 'planned-method-stands' })
  })
})

describe('a query decided after a release', () => {
  it('leaves released what came out the same, and names nothing formed with arms beside an arm-free cause', async () => {
    const file = trialFile({ week8: { 4: '120' } }).replace('T-004,S4,PAIN,Week 8,120', 'T-004,S4,PAIN,Week 8,44')
    const extractId = await judgedLook('spread', {}, file)
    const { report, hash } = await preview(extractId)
    expect(report.analyses.map(({ verdict }) => verdict)).toMatchObject([{ word: 'fallback-applies' }, { word: 'not-assessable', reason: 'data-query-open' }])
    await sign(extractId, hash)
    const { queries } = await viewExtract(database.db, { studyId: own.studyId, extractId, viewer: await own.as('second') })
    await resolveQuery(database.db, { studyId: own.studyId, extractId, queryId: queries[0]!.id as DataQueryId, decision: 'overruled', note: 'Beyond the scale.', ...await own.signing('second') })
    await judgeNow(database.db, { studyId: own.studyId, extractId })
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'fallback-applies', step: 'WELCH' })
    expect(await preview(extractId)).toMatchObject({ state: 'released' })
  })

  it('needs a new release for the analysis that the query had held', async () => {
    const extractId = await judgedLook('spread', {}, trialFile({ week8: { 4: '120' } }))
    expect(await preview(extractId)).toMatchObject({ state: 'nothing-to-release' })
    const seen = (await preview(extractId)).report.analyses[0]
    expect(seen?.prerequisites.filter(({ dependsOnArms }) => dependsOnArms).map(({ verdict }) => verdict)).toEqual(['held', 'held'])
    const { queries } = await viewExtract(database.db, { studyId: own.studyId, extractId, viewer: await own.as('second') })
    for (const { id } of queries) {
      await resolveQuery(database.db, { studyId: own.studyId, extractId, queryId: id as DataQueryId, decision: 'cleared', note: 'Confirmed.', ...await own.signing('second') })
    }
    await judgeNow(database.db, { studyId: own.studyId, extractId })
    expect(await verdictOf(extractId, 'PAIN-T')).toMatchObject({ word: 'held-behind-the-blind' })
    expect(await preview(extractId)).toMatchObject({ state: 'open' })
  })
})

describe('reading a verdict', () => {
  it('shows everybody, the cleared included, the same until figures by arm are asked for', async () => {
    const extractId = await judgedLook()
    const at = { studyId: own.studyId, extractId, analysis: 'PAIN-T' }
    const read = await readVerdict(database.db, at)
    expect(read).toMatchObject({
      extract: { number: 1, title: 'Look 1', standing: 'look', binding: false }, planVersion: 1, releasedAt: null, deviation: null,
      labels: { endpoint: 'Pain score', unit: 'mm', arms: { ACT: 'Active 20 mg', PBO: 'Placebo' }, set: 'Full analysis set' },
      seen: { byArm: null, plot: null, verdict: { word: 'held-behind-the-blind' } },
    })
    const arms = await readArms(database.db, { ...at, viewer: await own.as('cleared') })
    expect(arms.seen).toMatchObject({ verdict: { word: 'fallback-applies' }, byArm: [{ arm: 'ACT', n: 20 }, { arm: 'PBO', n: 20 }] })
    expect(await database.db.select({ how: exposure.how, subject: exposure.subject }).from(exposure).where(eq(exposure.how, 'arm-level-view')))
      .toContainEqual({ how: 'arm-level-view', subject: extractId })
  })

  it('says since when it is released and which deviation it belongs to', async () => {
    const extractId = await judgedLook()
    const { releasedAt } = await sign(extractId)
    expect(await readVerdict(database.db, { studyId: own.studyId, extractId, analysis: 'PAIN-T' })).toMatchObject({ releasedAt, deviation: { number: 1 } })
  })

  it('finds neither an analysis that the plan does not know nor an extract without report', async () => {
    const extractId = await judgedLook()
    expect(await refusalOf(readVerdict(database.db, { studyId: own.studyId, extractId, analysis: 'NONE' }))).toMatchObject({ code: 'not-found' })
    expect(await refusalOf(seenReport(database.db, { studyId: own.studyId, extractId: newId<ExtractId>() }))).toMatchObject({ code: 'not-found' })
    const other = await serviceStudy(database.db)
    expect(await refusalOf(seenReport(database.db, { studyId: other.studyId, extractId }))).toMatchObject({ code: 'not-found' })
  })
})
