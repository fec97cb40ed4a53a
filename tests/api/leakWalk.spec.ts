import { eq } from 'drizzle-orm'
import { beforeAll, describe, expect, it } from 'vitest'
import { uploadAllocationOperation } from '#shared/contract/allocations'
import { listDeviationsOperation } from '#shared/contract/deviations'
import { uploadExtractOperation } from '#shared/contract/extracts'
import { previewReleaseOperation, readArmsOperation, signReleaseOperation, type VerdictView } from '#shared/contract/ledger'
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

/** One study from plan to judged look, by the interface alone; only the allocation differs between two of them. */
async function runStudy(kind: 'spread' | 'even') {
  const cast = await makeCast()
  const { studyId, as } = cast
  const { planId, protocolNumber } = await registerPlan(cast)
  const query = { fileName: 'adeff.csv', cutOff: '2026-04-02', purpose: 'interim' } as const
  const { id: extractId } = await as.dataManager.client.call(uploadExtractOperation, { params: { studyId }, query, file: csv(trialFile()) })
  const at = { studyId: studyId as StudyId, extractId: extractId as ExtractId }
  await judgeNow(serverDatabase().db, at) // whether or not a worker is quicker, the history is the same
  await as.dataManager.client.refused(uploadExtractOperation, { params: { studyId }, query: { ...query, fileName: 'with-arms.csv' }, file: csv(carryingArms(kind)) })
  await as.cleared.client.call(uploadAllocationOperation, { params: { studyId }, query: { kind: 'true' }, file: csv(trialAllocation(kind)) })
  await judgeNow(serverDatabase().db, at)
  return { cast, studyId, planId, protocolNumber, extractId }
}
type Run = Awaited<ReturnType<typeof runStudy>>

const NOWHERE = '01935f7e-6a5c-7c4e-9f1d-2b6a8f0c4d21'

function placesOf({ studyId, planId, extractId }: Run, deviationIds: readonly string[]): Places {
  return {
    studyId: [studyId], planId: [planId], extractId: [extractId], analysis: ['PAIN-T', 'PAIN-P'],
    deviationId: deviationIds.length > 0 ? deviationIds : [NOWHERE], memoId: [NOWHERE], sessionId: [NOWHERE], personId: [NOWHERE],
  }
}

async function walk(run: Run): Promise<Record<typeof BLINDED[number], Reading[]>> {
  const { deviations } = await run.cast.as.monitor.client.call(listDeviationsOperation, { params: { studyId: run.studyId } })
  const readings = await Promise.all(BLINDED.map(async part => [part, await readEverything(run.cast.as[part].client, placesOf(run, deviations.map(({ id }) => id)))] as const))
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
    const { cast: { as: { cleared } }, studyId, extractId } = spread
    const params = { studyId, extractId }
    const before = await walk(spread)
    const { hash } = await cleared.client.call(previewReleaseOperation, { params })
    await cleared.client.call(signReleaseOperation, { params, body: { identifier: cleared.email, password: cleared.password, hash } })
    const after = await walk(spread)
    const figures = armFigures(await cleared.client.call(readArmsOperation, { params: { ...params, analysis: 'PAIN-T' } }))
    expect(figures.length).toBeGreaterThan(10)
    const forbidden = [...figures, ...await sealedHashes(spread)]

    for (const { path, text } of [before, after].flatMap(walked => Object.values(walked).flat())) {
      expect(forbidden.filter(secret => text.includes(secret)), path).toEqual([])
      const namesSubject = Array.from({ length: 40 }, (_, index) => subjectId(index + 1)).some(id => text.includes(id))
      expect(namesSubject && /\b(?:ACT|PBO)\b/.test(text), path).toBe(false)
    }
  })

  it('tells the released word and what follows from it', async () => {
    const { monitor } = await walk(spread)
    expect(monitor.find(({ operation }) => operation === 'ledger.read')?.text).toContain('fallback-applies')
    expect(monitor.find(({ operation }) => operation === 'deviations.list')?.text).toContain('PAIN-T')
  })
})
