import { createHash } from 'node:crypto'
import { and, eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { ExtractId } from '#shared/schemas/domainIds'
import { extract } from '../../../server/database/schema/extract'
import { exposure } from '../../../server/database/schema/member'
import { downloadExtract, giveReason, mapExtract, withdrawExtract } from '../../../server/services/extracts'
import { listExtracts, viewExtract } from '../../../server/services/extractViews'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { judgeNow, putPlanInForce, refusalOf, serviceStudy, upload, uploadAndJudge, type Part, type ServiceStudy } from '../../helpers/serviceStudy'
import { openLabelFile, TRIAL_HEADER, trialFile, trialPlan } from '../../helpers/trial'

let database: TestDatabase
let own: ServiceStudy

beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

const newStudy = async (...plan: Parameters<typeof serviceStudy> extends [unknown, ...infer Rest] ? Rest : never) => {
  own = await serviceStudy(database.db, ...plan)
  return own
}
const rows = () => database.db.select().from(extract).where(eq(extract.studyId, own.studyId)).orderBy(extract.number)
const view = async (extractId: string, part: Part = 'dataManager') => viewExtract(database.db, { studyId: own.studyId, extractId: extractId as ExtractId, viewer: await own.as(part) })
const sha256 = (text: string) => createHash('sha256').update(text).digest('hex')

async function bytesOf(extractId: string, part: Part): Promise<string> {
  const { bytes } = await downloadExtract(database.db, { studyId: own.studyId, extractId: extractId as ExtractId, viewer: await own.as(part) })
  const chunks: Uint8Array[] = []
  for await (const chunk of bytes) chunks.push(chunk)
  return Buffer.concat(chunks).toString('utf8')
}

describe('an extract with ADaM names', () => {
  it('is accepted at once, in its place of the schedule, with its bytes as received', async () => {
    await newStudy()
    const text = trialFile()
    const accepted = await upload(own, text, { fileName: 'C:\\cuts\\adeff.csv' })
    expect(accepted).toMatchObject({
      number: 1, fileName: 'adeff.csv', state: 'judging', standing: 'look', look: 'Look 1', planVersion: 1, rows: 120, subjects: 40, size: text.length,
      bytesHash: sha256(text), preview: null, suggestedMapping: null, findings: { refuse: 0, hold: 0, warn: 0 }, queries: [], reason: null,
    })
    expect(accepted.mapping).toMatchObject({ subject: ['USUBJID'], value: 'AVAL', flags: { FASFL: 'FASFL', ANL01FL: 'ANL01FL' } })
    expect(await bytesOf(accepted.id, 'dataManager')).toBe(text)
  })

  it('is a re-cut when its look is taken, and judged under the plan in force when it came', async () => {
    await newStudy()
    await upload(own, trialFile())
    const changed = trialPlan(own.document!.protocol.number, { looks: [{ ...own.document!.looks[0]!, name: 'Look one' }] })
    await putPlanInForce(database.db, { studyId: own.studyId, authorId: own.people.biostatistician.id, document: changed, version: 2 })
    const second = await upload(own, trialFile({ subjects: 30 }), { cutOff: '2026-04-05' })
    expect(second).toMatchObject({ number: 2, standing: 're-cut', look: 'Look one', planVersion: 2, state: 'judging' })
    const { extracts } = await listExtracts(database.db, { studyId: own.studyId, viewer: await own.as('monitor') })
    expect(extracts.map(({ planVersion, look }) => [planVersion, look])).toEqual([[1, 'Look 1'], [2, 'Look one']])
  })

  it('stands at the decision point when the database is locked for it, whatever its date', async () => {
    await newStudy()
    expect(await upload(own, trialFile(), { purpose: 'database-lock', cutOff: '2026-12-24' })).toMatchObject({ standing: 'decision-point', look: null, state: 'judging' })
  })

  it('gets a number and a place of its own when several come at once', async () => {
    await newStudy()
    const received = await Promise.all(Array.from({ length: 4 }, (_, index) => upload(own, trialFile({ seed: index + 1 }))))
    expect(received.map(({ number }) => number).sort()).toEqual([1, 2, 3, 4])
    expect(received.map(({ standing }) => standing).sort()).toEqual(['look', 're-cut', 're-cut', 're-cut'])
  })

  it('causes its check in the same transaction', async () => {
    await newStudy()
    const { id } = await upload(own, trialFile())
    const jobs = await database.sql<{ data: unknown }[]>`select data from pgboss.job where name = 'check' and data->>'extractId' = ${id}`
    expect(jobs).toEqual([{ data: { studyId: own.studyId, extractId: id } }])
    await upload(own, trialFile({ week8: { 1: 'x' } }))
    expect(await database.sql`select 1 from pgboss.job where name = 'check' and data->>'studyId' = ${own.studyId}`).toHaveLength(1)
  })

  it('needs a signed plan', async () => {
    await newStudy(null)
    expect(await refusalOf(upload(own, trialFile()))).toMatchObject({ code: 'plan-not-signed' })
    expect(await rows()).toEqual([])
  })

  it('needs a name', async () => {
    await newStudy()
    expect(await refusalOf(upload(own, trialFile(), { fileName: 'folder/ \u0007' }))).toMatchObject({ code: 'invalid-input', errors: [{ pointer: '/query/fileName' }] })
  })
})

describe('an extract in other words', () => {
  const renamed = () => trialFile().replace(TRIAL_HEADER, 'PATIENT,SITE,TEST,WEEK,RESULT,START,UNITS,DTYPE,ITT,ANL01FL')
  const mapping = {
    subject: ['PATIENT'], parameter: 'TEST', visit: 'WEEK', value: 'RESULT', baseline: 'START', unit: 'UNITS', site: 'SITE', imputed: 'DTYPE', arm: null,
    flags: { FASFL: 'ITT', ANL01FL: 'ANL01FL' },
  }

  it('waits until somebody tells which column is what, and the study remembers it', async () => {
    await newStudy()
    const waiting = await upload(own, renamed())
    expect(waiting).toMatchObject({ state: 'awaiting-mapping', standing: null, rows: null, mapping: null, suggestedMapping: { flags: { FASFL: '', ANL01FL: 'ANL01FL' } } })
    expect(waiting.preview).toHaveLength(20)
    const at = { studyId: own.studyId, extractId: waiting.id as ExtractId, viewer: await own.as('dataManager') }
    expect(await mapExtract(database.db, { ...at, mapping })).toMatchObject({ state: 'judging', standing: 'look', rows: 120, mapping, preview: null })
    expect(await refusalOf(mapExtract(database.db, { ...at, mapping }))).toMatchObject({ code: 'wrong-state' })
    expect(await upload(own, renamed())).toMatchObject({ state: 'judging', standing: 're-cut', mapping })
  })

  it('points at what is wrong with a mapping and stays as it was', async () => {
    await newStudy()
    const { id } = await upload(own, renamed())
    const at = { studyId: own.studyId, extractId: id as ExtractId, viewer: await own.as('dataManager') }
    expect(await refusalOf(mapExtract(database.db, { ...at, mapping: { ...mapping, value: 'AVAL', arm: 'TEST' } }))).toMatchObject({
      code: 'invalid-input', errors: [{ pointer: '/value', code: 'column-unknown' }, { pointer: '/arm', code: 'not-allowed' }],
    })
    expect(await view(id)).toMatchObject({ state: 'awaiting-mapping' })
  })

  it('is refused when the mapping reads text as numbers, and then not remembered', async () => {
    await newStudy()
    const { id } = await upload(own, renamed())
    const at = { studyId: own.studyId, extractId: id as ExtractId, viewer: await own.as('dataManager') }
    const refused = await mapExtract(database.db, { ...at, mapping: { ...mapping, value: 'SITE', site: null } })
    expect(refused).toMatchObject({ state: 'refused', standing: null, findings: { refuse: 120 } })
    expect(refused.findingList[0]).toMatchObject({ code: 'not-a-number', row: 2, column: 'SITE', params: { text: 'S1', looks: 'other' } })
    expect(await upload(own, renamed())).toMatchObject({ state: 'awaiting-mapping' })
  })
})

describe('a file that cannot be accepted', () => {
  it.each([
    ['text in a number', trialFile({ week8: { 3: '12;5' } }), 'not-a-number', 8],
    ['a header alone', `${TRIAL_HEADER}\n`, 'header-only', 1],
    ['nothing', '', 'empty-file', null],
    ['a picture', Buffer.from([0x89, 0x50, 0x4E, 0x47, 0x0D, 0x0A, 0x1A, 0x0A, 0x00]), 'not-utf8', 1],
    ['a missing column', trialFile().replace('AVAL,', 'RESULT,'), 'column-missing', 1],
    ['a column twice', trialFile().replace('SITEID', 'AVAL'), 'column-repeated', 1],
    ['a row of another width', `${trialFile()}T-041,S1\n`, 'row-width', 122],
  ])('is kept with its reason: %s', async (_, content, code, row) => {
    await newStudy()
    const refused = await upload(own, content)
    expect(refused).toMatchObject({ state: 'refused', standing: null, look: null, rows: null })
    expect(refused.findingList[0]).toMatchObject({ severity: 'refuse', code, row })
    expect((await rows())[0]).toMatchObject({ columnsBlobId: null, contentHash: null })
    await judgeNow(database.db, { studyId: own.studyId, extractId: refused.id as ExtractId })
    expect(await view(refused.id)).toMatchObject({ state: 'refused' })
  })

  it('does not take the place of a look', async () => {
    await newStudy()
    await upload(own, trialFile({ week8: { 3: 'x' } }))
    expect(await upload(own, trialFile())).toMatchObject({ number: 2, standing: 'look' })
  })
})

describe('an extract that carries treatment', () => {
  const carrying = openLabelFile('spread')

  it('is stopped and sealed: the column is named, never a value, and only cleared members get at the bytes', async () => {
    await newStudy()
    const refusal = await refusalOf(upload(own, carrying))
    expect(refusal).toMatchObject({ code: 'treatment-column', errors: [{ row: 1, column: 'TRT01P' }] })
    const [row] = await rows()
    const seen = await view(row!.id)
    expect(seen).toMatchObject({ state: 'sealed', columns: [], preview: null, mapping: null, suggestedMapping: null, size: null, bytesHash: null, contentHash: null, rows: null })
    expect(seen.findingList).toEqual([{ severity: 'refuse', code: 'treatment-column', row: 1, column: 'TRT01P', params: {} }])
    expect(JSON.stringify([refusal.errors, seen])).not.toMatch(/ACT|PBO|T-001/)
    expect(await refusalOf(bytesOf(row!.id, 'dataManager'))).toMatchObject({ code: 'not-permitted' })
    expect(await refusalOf(bytesOf(row!.id, 'biostatistician'))).toMatchObject({ code: 'not-permitted' })
    expect(await view(row!.id, 'cleared')).toMatchObject({ bytesHash: sha256(carrying) })
    expect(await bytesOf(row!.id, 'cleared')).toBe(carrying)
  })

  it('makes whoever opens it exposed', async () => {
    const [row] = await rows()
    const exposed = await database.db.select().from(exposure).where(and(eq(exposure.studyId, own.studyId), eq(exposure.personId, own.people.cleared.id)))
    expect(exposed).toMatchObject([{ how: 'allocation', subject: row!.id }])
  })

  it('lies in the database encrypted', async () => {
    const [row] = await rows()
    const stored = await database.sql<{ hit: boolean }[]>`select position('TRT01P'::bytea in bytes) > 0 as hit from blob_chunk where blob_id = ${row!.blobId}`
    expect(stored.length).toBeGreaterThan(0)
    expect(stored.every(({ hit }) => !hit)).toBe(true)
  })

  it('is sealed under an innocent name too, and when not even the header can be read', async () => {
    await newStudy()
    expect(await refusalOf(upload(own, carrying.replace('TRT01P', 'NOTE')))).toMatchObject({ code: 'treatment-column', errors: [{ column: 'NOTE' }] })
    const unreadable = await upload(own, Buffer.from(`\uFEFF${carrying}`, 'utf16le'))
    expect(unreadable).toMatchObject({ state: 'refused', bytesHash: null })
    expect(unreadable.findingList.map(({ code }) => code)).toEqual(['binary', 'unreadable-sealed'])
    expect(await refusalOf(bytesOf(unreadable.id, 'dataManager'))).toMatchObject({ code: 'not-permitted' })
  })

  it('is welcome in an open-label study, whose arm it is', async () => {
    await newStudy(number => trialPlan(number, { blinding: 'open-label' }))
    expect(await upload(own, carrying)).toMatchObject({ state: 'judging', mapping: { arm: 'TRT01P' }, bytesHash: sha256(carrying) })
    const wrong = await upload(own, carrying.replace('Y,PBO', 'Y,PLC'))
    expect(wrong.findingList).toMatchObject([{ code: 'unknown-arm', column: 'TRT01P', params: { text: 'PLC' } }, { code: 'subject-two-arms' }].slice(0, 1))
  })
})

describe('an unscheduled extract', () => {
  it('is screened at once and judged when somebody else has signed why', async () => {
    await newStudy()
    const extractId = await uploadAndJudge(own, trialFile({ week8: { 4: '120' } }), { cutOff: '2026-06-01' })
    const waiting = await view(extractId)
    expect(waiting).toMatchObject({ state: 'awaiting-reason', standing: 'unscheduled', openQueries: 2, findings: { hold: 2 } })
    expect(waiting.contentHash).toMatch(/^[0-9a-f]{64}$/)
    const given = await giveReason(database.db, { studyId: own.studyId, extractId, reason: 'Asked for by the monitoring committee.', ...await own.signing('biostatistician') })
    expect(given).toMatchObject({ state: 'judging', reason: { text: 'Asked for by the monitoring committee.', signature: { meaning: 'reason-given', name: 'Test biostatistician' } } })
    await judgeNow(database.db, { studyId: own.studyId, extractId })
    expect(await view(extractId)).toMatchObject({ state: 'checked' })
    expect(await refusalOf(giveReason(database.db, { studyId: own.studyId, extractId, reason: 'Again.', ...await own.signing('biostatistician') }))).toMatchObject({ code: 'wrong-state' })
  })

  it('does not take its reason from whoever uploaded it, nor without the right password', async () => {
    await newStudy()
    const extractId = await uploadAndJudge(own, trialFile(), { cutOff: '2026-06-01' })
    const at = { studyId: own.studyId, extractId, reason: 'Because.' }
    expect(await refusalOf(giveReason(database.db, { ...at, ...await own.signing('dataManager') }))).toMatchObject({ code: 'separation-of-duties' })
    expect(await refusalOf(giveReason(database.db, { ...at, ...await own.signing('second'), password: 'wrong' }))).toMatchObject({ code: 'signature-refused' })
    expect(await view(extractId)).toMatchObject({ state: 'awaiting-reason', reason: null })
  })
})

describe('withdrawing', () => {
  it('marks an extract and keeps its place taken', async () => {
    await newStudy()
    const extractId = await uploadAndJudge(own, trialFile())
    const withdrawn = await withdrawExtract(database.db, { studyId: own.studyId, extractId, reason: 'Wrong cut.', ...await own.signing('dataManager') })
    expect(withdrawn).toMatchObject({ state: 'withdrawn', standing: 'look' })
    expect(await upload(own, trialFile())).toMatchObject({ standing: 're-cut' })
    expect(await refusalOf(withdrawExtract(database.db, { studyId: own.studyId, extractId, reason: 'Again.', ...await own.signing('dataManager') }))).toMatchObject({ code: 'wrong-state' })
  })

  it('leaves alone what was never accepted, and other studies', async () => {
    await newStudy()
    const { id } = await upload(own, '')
    const signing = { reason: 'Wrong cut.', ...await own.signing('dataManager') }
    expect(await refusalOf(withdrawExtract(database.db, { studyId: own.studyId, extractId: id as ExtractId, ...signing }))).toMatchObject({ code: 'wrong-state' })
    const other = await serviceStudy(database.db)
    expect(await refusalOf(withdrawExtract(database.db, { studyId: other.studyId, extractId: id as ExtractId, ...signing }))).toMatchObject({ code: 'not-found' })
  })
})
