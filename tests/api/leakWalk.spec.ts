import { eq } from 'drizzle-orm'
import { beforeAll, describe, expect, it } from 'vitest'
import { uploadAllocationOperation } from '#shared/contract/allocations'
import { listDeviationsOperation, listMemosOperation, settleOperation } from '#shared/contract/deviations'
import { listExtractsOperation, uploadExtractOperation } from '#shared/contract/extracts'
import { lockDatabaseOperation, previewReleaseOperation, readArmsOperation, signReleaseOperation, type VerdictView } from '#shared/contract/ledger'
import type { ExtractId } from '#shared/schemas/domainIds'
import type { StudyId } from '#shared/schemas/ids'
import { check } from '../../server/database/schema/check'
import { allocation } from '../../server/database/schema/extract'
import { comparable, readEverything, type Places, type Reading } from '../helpers/readEverything'
import { registerPlan } from '../helpers/registerPlan'
import { admit, clear, makeClient, makeStudy, serverDatabase, type SignedInAccount } from '../helpers/server'
import { judgeNow } from '../helpers/serviceStudy'
import { openLabelFile, subjectId, trialAllocation, trialFile } from '../helpers/trial'

const MEMBERS = {
  biostatistician: 'biostatistician', reviewer: 'biostatistician', cleared: 'biostatistician', dataManager: 'data-manager', investigator: 'investigator', monitor: 'monitor',
} as const
interface Cast { readonly studyId: string, readonly as: Record<keyof typeof MEMBERS | 'administrator' | 'stranger', SignedInAccount> }
const BLINDED = ['biostatistician', 'reviewer', 'dataManager', 'investigator', 'monitor', 'administrator', 'stranger'] as const

/** A file that carries arms under names of unequal length, and not the same number of each in both studies. */
const carryingArms = (kind: 'spread' | 'even') => openLabelFile(kind).replaceAll(',ACT', ',Active 20 mg').replace(',Active 20 mg', kind === 'even' ? ',PBO' : ',Active 20 mg')

const csv = (bytes: string) => ({ bytes, type: 'text/csv' })

/** People come one after the other, so that two studies have the same history. */
async function makeCast(): Promise<Cast> {
  const administrator = await makeClient({ name: 'Ada Administrator', administrator: true })
  const studyId = await makeStudy(administrator.client)
  const members: Partial<Record<keyof typeof MEMBERS, SignedInAccount>> = {}
  for (const [name, role] of Object.entries(MEMBERS) as [keyof typeof MEMBERS, typeof MEMBERS[keyof typeof MEMBERS]][]) {
    const account = members[name] = await makeClient({ name: `Test ${name}` })
    await admit(administrator.client, { studyId, personId: account.id, role })
  }
  const as = { ...members as Required<typeof members>, administrator, stranger: await makeClient({ name: 'Test stranger' }) }
  await clear(administrator.client, { studyId, personId: as.cleared.id, proposer: as.biostatistician.client })
  return { studyId, as }
}

type Part = keyof Cast['as']
const signer = ({ as }: Cast, part: Part) => ({ identifier: as[part].email, password: as[part].password })

async function bringIn({ studyId, as: { dataManager } }: Cast, content: string, purpose: 'interim' | 'database-lock'): Promise<ExtractId> {
  const query = { fileName: 'adeff.csv', cutOff: purpose === 'interim' ? '2026-04-02' : '2026-06-11', purpose }
  const { id } = await dataManager.client.call(uploadExtractOperation, { params: { studyId }, query, file: csv(content) })
  return judged(studyId, id as ExtractId)
}

/** Judged here and now: whether or not a worker is quicker, the history is the same. */
async function judged(studyId: string, extractId: ExtractId): Promise<ExtractId> {
  await judgeNow(serverDatabase().db, { studyId: studyId as StudyId, extractId })
  return extractId
}

/**
 * One study from plan to database lock, by the interface alone: a look before and after the allocation is there,
 * a file that was sealed, the decision point, locked. Two of them differ in nothing but the allocation.
 */
async function runStudy(kind: 'spread' | 'even') {
  const cast = await makeCast()
  const { studyId, as } = cast
  const params = { studyId }
  const { planId, protocolNumber } = await registerPlan(cast)
  const look = await bringIn(cast, trialFile(), 'interim')
  const query = { fileName: 'with-arms.csv', cutOff: '2026-04-02', purpose: 'interim' } as const
  await as.dataManager.client.refused(uploadExtractOperation, { params, query, file: csv(carryingArms(kind)) })
  await as.cleared.client.call(uploadAllocationOperation, { params, query: { kind: 'true' }, file: csv(trialAllocation(kind)) })
  await judged(studyId, look)
  const lock = await bringIn(cast, trialFile({ seed: 11 }), 'database-lock')
  await as.dataManager.client.call(lockDatabaseOperation, { params, body: { ...signer(cast, 'dataManager'), extractId: lock, reason: null } })
  const { extracts } = await as.monitor.client.call(listExtractsOperation, { params })
  return { cast, studyId, planId, protocolNumber, look, lock, extractIds: extracts.map(({ id }) => id) }
}
type Run = Awaited<ReturnType<typeof runStudy>>

/** A cleared member lets the verdicts of an extract out. */
async function release({ cast, studyId }: Run, extractId: ExtractId): Promise<void> {
  const { client } = cast.as.cleared
  const params = { studyId, extractId }
  const { hash } = await client.call(previewReleaseOperation, { params })
  await client.call(signReleaseOperation, { params, body: { ...signer(cast, 'cleared'), hash } })
}

/** The deviation is settled in accordance with the plan, which makes its memo. */
async function settleAll({ cast, studyId }: Run): Promise<void> {
  const { client } = cast.as.reviewer
  const { deviations } = await client.call(listDeviationsOperation, { params: { studyId } })
  for (const { id: deviationId } of deviations) {
    await client.call(settleOperation, { params: { studyId, deviationId }, body: { ...signer(cast, 'reviewer'), kind: 'accept-step', note: 'In accordance with the plan.' } })
  }
}

const NOWHERE = '01935f7e-6a5c-7c4e-9f1d-2b6a8f0c4d21'

async function placesOf({ cast: { as: { monitor: { client } } }, studyId, planId, extractIds }: Run): Promise<Places> {
  const params = { studyId }
  const { deviations } = await client.call(listDeviationsOperation, { params })
  const { memos } = await client.call(listMemosOperation, { params })
  const orNowhere = (list: readonly { readonly id: string }[]) => list.length > 0 ? list.map(({ id }) => id) : [NOWHERE]
  return {
    studyId: [studyId], planId: [planId], extractId: extractIds, analysis: ['PAIN-T', 'PAIN-P'],
    deviationId: orNowhere(deviations), memoId: orNowhere(memos), sessionId: [NOWHERE], personId: [NOWHERE],
  }
}

async function walk(run: Run): Promise<Record<typeof BLINDED[number], Reading[]>> {
  const places = await placesOf(run)
  const readings = await Promise.all(BLINDED.map(async part => [part, await readEverything(run.cast.as[part].client, places)] as const))
  return Object.fromEntries(readings) as Record<typeof BLINDED[number], Reading[]>
}

/** Who is who does not depend on the order in which ids sort. */
const knownOf = ({ protocolNumber, cast: { as } }: Run): Record<string, string> =>
  ({ protocol: protocolNumber, ...Object.fromEntries(Object.entries(as).map(([part, { id }]) => [part, id])) })

/** Answers of the study at hand; those of the installation also tell of what other tests are doing. */
const ofStudy = (readings: readonly Reading[]) => readings.filter(({ scope }) => scope === 'study')

/** Figures formed with arms, as they would stand in an answer. */
function armFigures({ seen }: VerdictView): string[] {
  const figures = [
    ...(seen.byArm ?? []).flatMap(({ sd, skewness, excessKurtosis }) => [sd, skewness, excessKurtosis]),
    ...seen.prerequisites.filter(({ dependsOnArms }) => dependsOnArms).flatMap(each => [...each.figures, ...each.samples.flatMap(sample => sample.figures)])
      .flatMap(({ value, pValue, lower, upper }) => [value, pValue, lower, upper]),
    ...(seen.plot?.quantiles ?? []).map(({ value }) => value),
  ]
  // A short figure such as 6.44 stands in moments and plans by chance; one of six digits does not.
  return figures.filter(figure => figure !== null).map(String).filter(text => text.length >= 7)
}

/** Hashes over bytes that contain allocation or what was judged with it. */
async function sealedHashes({ studyId }: Run): Promise<string[]> {
  const { db } = serverDatabase()
  const lists = await db.select({ hash: allocation.hash }).from(allocation).where(eq(allocation.studyId, studyId as StudyId))
  const reports = await db.select({ hash: check.reportHash }).from(check).where(eq(check.studyId, studyId as StudyId))
  return [...lists, ...reports].map(({ hash }) => hash)
}

describe('what members without clearance receive', () => {
  let spread: Run
  let even: Run

  beforeAll(async () => {
    spread = await runStudy('spread')
    even = await runStudy('even')
  })

  it('is the same, byte by byte, whatever the allocation, before anything is released', async () => {
    const [one, other] = [await walk(spread), await walk(even)]
    for (const part of BLINDED) {
      const compare = (run: Run, readings: Reading[]) => comparable(ofStudy(readings), knownOf(run))
      expect(compare(spread, one[part]), part).toBe(compare(even, other[part]))
    }
    expect(ofStudy(one.monitor).some(({ text }) => text.includes('held-behind-the-blind'))).toBe(true)
  })

  it('holds no figure formed with arms, no arm of a subject and no hash over either, before and after the release', async () => {
    const { cast, studyId, look, lock } = spread
    const before = await walk(spread)
    await release(spread, look)
    await release(spread, lock)
    await settleAll(spread)
    const after = await walk(spread)
    const arms = (extractId: string) => cast.as.cleared.client.call(readArmsOperation, { params: { studyId, extractId, analysis: 'PAIN-T' } })
    const figures = [...armFigures(await arms(look)), ...armFigures(await arms(lock))]
    expect(figures.length).toBeGreaterThan(20)
    const forbidden = [...figures, ...await sealedHashes(spread)]

    for (const { path, text } of [before, after].flatMap(walked => Object.values(walked).flat())) {
      expect(forbidden.filter(secret => text.includes(secret)), path).toEqual([])
      const namesSubject = Array.from({ length: 40 }, (_, index) => subjectId(index + 1)).some(id => text.includes(id))
      expect(namesSubject && /\b(?:ACT|PBO)\b/.test(text), path).toBe(false)
    }
  })

  it('tells the released word and what follows from it', async () => {
    const { monitor } = await walk(spread)
    const textOf = (id: string) => monitor.filter(({ operation }) => operation === id).map(({ text }) => text).join('\n')
    expect(textOf('ledger.read')).toContain('fallback-applies')
    expect(textOf('deviations.read')).toContain('"binding":true')
    expect(textOf('memos.list')).toContain('foreseen-switch')
  })
})
