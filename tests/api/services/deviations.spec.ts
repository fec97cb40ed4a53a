import { eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Plan } from '#shared/plan/schema'
import type { DeviationId, ExtractId } from '#shared/schemas/domainIds'
import { acknowledgement, deviation, settlement } from '../../../server/database/schema/deviation'
import { study } from '../../../server/database/schema/study'
import { acknowledge } from '../../../server/services/acknowledgements'
import { listDeviations, viewDeviation } from '../../../server/services/deviationViews'
import { previewRelease, signRelease } from '../../../server/services/releases'
import { secondSettlement, settle } from '../../../server/services/settlements'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { allocate, refusalOf, serviceStudy, uploadAndJudge, type Part, type ServiceStudy } from '../../helpers/serviceStudy'
import { SKEWED, trialAllocation, trialFile, trialPlan } from '../../helpers/trial'

let database: TestDatabase
beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

const skewed = trialFile({ week8: SKEWED })
type Own = ServiceStudy & { readonly extractId: ExtractId }

async function release({ studyId, as, signing }: ServiceStudy, extractId: ExtractId) {
  const { hash } = await previewRelease(database.db, { studyId, extractId, viewer: await as('cleared') })
  await signRelease(database.db, { studyId, extractId, hash, ...await signing('cleared') })
}

/** A look at which the analysis formed with arms falls back on Welch. */
async function switched(changes: Partial<Plan> = {}, released = true): Promise<Own> {
  const own = await serviceStudy(database.db, number => trialPlan(number, changes))
  const extractId = await uploadAndJudge(own, trialFile())
  await allocate(own, trialAllocation('spread'), [extractId])
  if (released) await release(own, extractId)
  return { ...own, extractId }
}

/** A look at which no registered method fits the differences within subject, which everybody may see. */
async function unresolved(changes: Partial<Plan> = {}): Promise<Own> {
  const own = await serviceStudy(database.db, number => trialPlan(number, changes))
  return { ...own, extractId: await uploadAndJudge(own, skewed) }
}

async function onlyDeviation({ studyId }: ServiceStudy): Promise<DeviationId> {
  const rows = await database.db.select({ id: deviation.id }).from(deviation).where(eq(deviation.studyId, studyId))
  expect(rows).toHaveLength(1)
  return rows[0]?.id ?? ('' as DeviationId)
}

async function view(own: ServiceStudy) {
  return viewDeviation(database.db, { studyId: own.studyId, deviationId: await onlyDeviation(own) })
}

const settleAs = async (own: ServiceStudy, part: Part, kind: Parameters<typeof settle>[1]['kind'], note = 'As the plan says.') =>
  settle(database.db, { studyId: own.studyId, deviationId: await onlyDeviation(own), kind, note, ...await own.signing(part) })

const secondAs = async (own: ServiceStudy, part: Part) =>
  secondSettlement(database.db, { studyId: own.studyId, deviationId: await onlyDeviation(own), ...await own.signing(part) })

const answerAs = async (own: ServiceStudy, part: Part, decision: 'acknowledged' | 'declined' = 'acknowledged', comment: string | null = null) =>
  acknowledge(database.db, { studyId: own.studyId, deviationId: await onlyDeviation(own), decision, comment, ...await own.signing(part) })

const breakBlindOf = ({ studyId }: ServiceStudy) => database.db.update(study).set({ blindBrokenAt: new Date() }).where(eq(study.id, studyId))

async function mailsAbout({ studyId }: ServiceStudy) {
  const rows = await database.db.execute<{ data: Record<string, unknown> }>(sql`select data from pgboss.job where name = 'mail' and data ->> 'studyId' = ${studyId}`)
  return [...rows].map(({ data }) => data)
}

const actionsIn = async ({ studyId }: ServiceStudy) => {
  const rows = await database.db.execute<{ action: string }>(sql`select action from record_entry where chain = ${studyId} order by seq`)
  return [...rows].map(({ action }) => action)
}

describe('a deviation', () => {
  it('opens with a verdict that everybody may see at once, and tells the investigator', async () => {
    const own = await unresolved()
    const seen = await view(own)
    expect(seen).toMatchObject({
      number: 1, analysis: { id: 'PAIN-P' }, state: 'open', deviationClass: 'unresolved', verdict: { word: 'no-registered-method' }, binding: false,
      acknowledgement: { state: 'awaited', person: null }, failed: [{ kind: 'normality' }], settlements: [], memo: null,
      entries: [{ extract: { number: 1, title: 'Look 1' } }],
    })
    expect(seen.acknowledgement.dueAt.getTime() - seen.openedAt.getTime()).toBeGreaterThan(9.9 * 24 * 3600 * 1000)
    expect(await mailsAbout(own)).toEqual([{ kind: 'deviation-opened', to: own.people.investigator.id, studyId: own.studyId, deviationId: seen.id }])
  })

  it('stays unopened and untold while its verdict is held behind the blind', async () => {
    const own = await switched({}, false)
    expect(await listDeviations(database.db, own)).toEqual({ deviations: [] })
    expect(await mailsAbout(own)).toEqual([])
    expect((await actionsIn(own)).filter(action => action.startsWith('deviation.'))).toEqual([])
    await release(own, own.extractId)
    expect(await view(own)).toMatchObject({ analysis: { id: 'PAIN-T' }, deviationClass: 'foreseen-switch', verdict: { word: 'fallback-applies', step: 'WELCH' }, stepLabel: expect.stringContaining('Welch') })
    expect(await mailsAbout(own)).toHaveLength(1)
  })

  it.each([[true, [{ kind: 'equal-spread', label: 'Equal spread' }]], [false, null]] as const)('names what failed between arms only if the plan does: %s', async (namesFailed, failed) => {
    const own = await switched({ release: { armDependent: 'each-look', namesFailed } })
    expect((await view(own)).failed).toEqual(failed)
  })

  it('belongs to its study alone', async () => {
    const [own, other] = [await unresolved(), await serviceStudy(database.db)]
    const deviationId = await onlyDeviation(own)
    expect(await refusalOf(viewDeviation(database.db, { studyId: other.studyId, deviationId }))).toMatchObject({ code: 'not-found' })
    const attempt = settle(database.db, { studyId: other.studyId, deviationId, kind: 'report-without-claim', note: 'No.', ...await other.signing('biostatistician') })
    expect(await refusalOf(attempt)).toMatchObject({ code: 'not-found' })
  })

  it('is one per planned analysis: later extracts add to it and take it from observation again', async () => {
    const own = await unresolved()
    await settleAs(own, 'biostatistician', 'keep-under-observation')
    expect(await view(own)).toMatchObject({ state: 'under-observation' })
    await uploadAndJudge(own, skewed, { cutOff: '2026-06-11', purpose: 'database-lock' })
    const seen = await view(own)
    expect(seen).toMatchObject({ state: 'open', entries: [{ extract: { title: 'Look 1' } }, { extract: { title: 'Database lock' } }] })
    expect(seen.settlementsAllowed).not.toContain('keep-under-observation')
    expect(await mailsAbout(own)).toHaveLength(1)
  })
})

describe('a further run over the same extract', () => {
  it('adds nothing when it says the same', async () => {
    const own = await unresolved()
    await settleAs(own, 'biostatistician', 'report-without-claim')
    await allocate(own, trialAllocation('even'), [own.extractId])
    expect(await view(own)).toMatchObject({ state: 'settled', entries: [{ extract: { number: 1 } }] })
    expect((await actionsIn(own)).filter(action => action === 'deviation.extended')).toHaveLength(1)
  })
})

describe('acknowledgement', () => {
  it('is signed by an investigator, once, and changes no verdict', async () => {
    const own = await unresolved()
    const before = await view(own)
    const after = await answerAs(own, 'investigator', 'acknowledged', 'Read and understood.')
    expect(after.acknowledgement).toMatchObject({
      state: 'acknowledged', comment: 'Read and understood.', person: { id: own.people.investigator.id }, signature: { meaning: 'acknowledged', status: 'valid' },
    })
    expect([after.verdict, after.state, after.settlementsAllowed]).toEqual([before.verdict, before.state, before.settlementsAllowed])
    expect(await refusalOf(answerAs(own, 'investigator'))).toMatchObject({ code: 'already-done' })
  })

  it('asks who declines for a reason', async () => {
    const own = await unresolved()
    expect(await refusalOf(answerAs(own, 'investigator', 'declined', ''))).toMatchObject({ code: 'invalid-input', errors: [{ pointer: '/comment' }] })
    expect((await answerAs(own, 'investigator', 'declined', 'I was not asked before.')).acknowledgement).toMatchObject({ state: 'declined' })
  })

  it('is given by nobody for another', async () => {
    const own = await unresolved()
    for (const part of ['biostatistician', 'monitor', 'dataManager'] as const) expect(await refusalOf(answerAs(own, part))).toMatchObject({ code: 'not-permitted' })
    const named = await unresolved({ acknowledger: { email: 'somebody.else@example.org', days: 10 } })
    expect(await refusalOf(answerAs(named, 'investigator'))).toMatchObject({ code: 'not-permitted' })
    expect(await mailsAbout(named)).toEqual([])
    expect(await database.db.select().from(acknowledgement).where(eq(acknowledgement.studyId, named.studyId))).toEqual([])
  })

  it('is outstanding once the days allowed have passed', async () => {
    const own = await unresolved()
    const seen = await viewDeviation(database.db, { studyId: own.studyId, deviationId: await onlyDeviation(own) }, new Date(Date.now() + 11 * 24 * 3600 * 1000))
    expect(seen.acknowledgement).toMatchObject({ state: 'outstanding', signature: null })
  })

  it('leaves nothing behind when the password is wrong', async () => {
    const own = await unresolved()
    const wrong = { ...await own.signing('investigator'), password: 'wrong' }
    const attempt = acknowledge(database.db, { studyId: own.studyId, deviationId: await onlyDeviation(own), decision: 'acknowledged', comment: null, ...wrong })
    expect(await refusalOf(attempt)).toMatchObject({ code: 'signature-refused' })
    expect((await view(own)).acknowledgement.state).toBe('awaited')
    expect(await actionsIn(own)).not.toContain('deviation.acknowledged')
  })
})

describe('settlement', () => {
  it('of a registered step makes the memo at once', async () => {
    const own = await switched()
    const seen = await settleAs(own, 'biostatistician', 'accept-step')
    expect(seen).toMatchObject({ state: 'settled', memo: { number: 1, state: 'awaiting-signature' }, settlements: [{ kind: 'accept-step', signature: { meaning: 'settled' }, second: null }] })
    expect((await actionsIn(own)).slice(-2)).toEqual(['deviation.settled', 'memo.made'])
    expect(await refusalOf(settleAs(own, 'biostatistician', 'accept-step'))).toMatchObject({ code: 'wrong-state' })
  })

  it('is closed to whoever uploaded the extract or signed its release', async () => {
    const own = await switched()
    expect(await refusalOf(settleAs(own, 'dataManager', 'accept-step'))).toMatchObject({ code: 'separation-of-duties', errors: [{ params: { earlier: 'extract.upload' } }] })
    expect(await refusalOf(settleAs(own, 'cleared', 'accept-step'))).toMatchObject({ code: 'separation-of-duties', errors: [{ params: { earlier: 'release.sign' } }] })
    expect(await database.db.select().from(settlement).where(eq(settlement.studyId, own.studyId))).toEqual([])
  })

  it('accepts no step where there is none, and overrules nothing that rests on arms', async () => {
    expect(await refusalOf(settleAs(await unresolved(), 'biostatistician', 'accept-step'))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'settlement-not-allowed' }] })
    expect(await refusalOf(settleAs(await switched(), 'biostatistician', 'overrule'))).toMatchObject({ code: 'wrong-state' })
  })

  it('by amendment makes no memo and is closed once the blind is broken', async () => {
    const own = await unresolved()
    expect(await settleAs(own, 'biostatistician', 'amend-plan')).toMatchObject({ state: 'amended', memo: null })
    const broken = await unresolved()
    await breakBlindOf(broken)
    for (const kind of ['amend-plan', 'overrule'] as const) expect(await refusalOf(settleAs(broken, 'biostatistician', kind))).toMatchObject({ code: 'wrong-state' })
  })
})

describe('overruling', () => {
  it('needs two different unexposed biostatisticians and is a departure', async () => {
    const own = await unresolved()
    expect(await settleAs(own, 'biostatistician', 'overrule', 'One value was mistyped by the site.')).toMatchObject({ state: 'awaiting-second', memo: null, deviationClass: 'unresolved' })
    expect(await refusalOf(secondAs(own, 'biostatistician'))).toMatchObject({ code: 'separation-of-duties', errors: [{ params: { earlier: 'overrule.first' } }] })
    expect(await refusalOf(secondAs(own, 'dataManager'))).toMatchObject({ code: 'separation-of-duties' })
    const seen = await secondAs(own, 'second')
    expect(seen).toMatchObject({ state: 'settled', deviationClass: 'departure', memo: { state: 'awaiting-signature' } })
    expect(seen.settlements[0]).toMatchObject({ second: { by: { id: own.people.second.id }, signature: { meaning: 'seconded' } } })
  })

  it('lapses when the blind is broken in between', async () => {
    const own = await unresolved()
    await settleAs(own, 'biostatistician', 'overrule')
    await breakBlindOf(own)
    expect(await refusalOf(secondAs(own, 'second'))).toMatchObject({ code: 'wrong-state', errors: [{ code: 'blind-broken' }] })
  })
})
