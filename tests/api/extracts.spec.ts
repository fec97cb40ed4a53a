import { request } from 'node:http'
import { eq } from 'drizzle-orm'
import { beforeAll, describe, expect, it } from 'vitest'
import { downloadExtractOperation, listExtractsOperation, readExtractOperation, uploadExtractOperation } from '#shared/contract/extracts'
import type { Problem } from '#shared/contract/problems'
import type { StudyId } from '#shared/schemas/ids'
import { blobChunk } from '../../server/database/schema/blob'
import { extract } from '../../server/database/schema/extract'
import { addressOf, serverOrigin, type Client } from '../helpers/client'
import { registerPlan } from '../helpers/registerPlan'
import { makeStudyWithRoles, serverDatabase } from '../helpers/server'
import { openLabelFile, trialFile } from '../helpers/trial'

type Study = Awaited<ReturnType<typeof makeStudyWithRoles>>

const limit = Number(process.env.STIPULE_UPLOAD_LIMIT ?? 50 * 1024 * 1024)
const query = { fileName: 'adeff.csv', cutOff: '2026-04-02', purpose: 'interim' } as const
const csv = (bytes: string) => ({ bytes, type: 'text/csv' })

let study: Study
let dataManager: Client

beforeAll(async () => {
  study = await makeStudyWithRoles()
  dataManager = study.as.dataManager.client
})

const stored = () => serverDatabase().db.select().from(extract).where(eq(extract.studyId, study.studyId as StudyId))
const address = () => addressOf(uploadExtractOperation, { params: { studyId: study.studyId }, query })

/** An upload whose body is written by hand: declared length without body, or pieces without a declared length. */
function rawUpload(cookie: string, { declared, pieces }: { declared?: number, pieces: Iterable<Buffer> }): Promise<Problem> {
  return new Promise((resolve, reject) => {
    const sent = request(`${serverOrigin()}${address()}`, {
      method: 'POST', headers: { cookie, 'origin': serverOrigin(), 'content-type': 'text/csv', ...declared === undefined ? {} : { 'content-length': declared } },
    }, (response) => {
      let text = ''
      response.setEncoding('utf8').on('data', (part: string) => {
        text += part
      }).on('end', () => {
        sent.destroy()
        resolve(JSON.parse(text) as Problem)
      })
    })
    sent.on('error', reject)
    const writing = pieces[Symbol.iterator]()
    const write = () => {
      for (let next = writing.next(); !next.done; next = writing.next()) {
        if (!sent.write(next.value)) return void sent.once('drain', write)
      }
      if (declared === undefined) sent.end()
      else sent.flushHeaders()
    }
    write()
  })
}

describe('uploading over HTTP', () => {
  it('needs a signed plan, and leaves nothing behind without one', async () => {
    const problem = await dataManager.refused(uploadExtractOperation, { params: { studyId: study.studyId }, query, file: csv(trialFile()) })
    expect(problem).toMatchObject({ status: 409, code: 'plan-not-signed' })
    expect(await stored()).toEqual([])
  })

  it('takes a file, gives it back to be saved, and knows it in its own study alone', async () => {
    await registerPlan(study)
    const { id } = await dataManager.call(uploadExtractOperation, { params: { studyId: study.studyId }, query: { ...query, fileName: 'Auswertung "1".csv' }, file: csv(trialFile()) })
    const at = { studyId: study.studyId, extractId: id }
    const response = await study.as.biostatistician.client.send(downloadExtractOperation, { params: at })
    expect(await response.text()).toBe(trialFile())
    expect(response.headers.get('content-type')).toBe('application/octet-stream')
    expect(response.headers.get('x-content-type-options')).toBe('nosniff')
    expect(response.headers.get('content-disposition')).toBe('attachment; filename="Auswertung__1_.csv"; filename*=UTF-8\'\'Auswertung%20%221%22.csv')
    expect(await study.as.monitor.client.refused(downloadExtractOperation, { params: at })).toMatchObject({ status: 403, code: 'not-permitted' })
    const other = await makeStudyWithRoles()
    expect(await other.as.dataManager.client.refused(readExtractOperation, { params: { ...at, studyId: other.studyId } })).toMatchObject({ status: 404 })
  })

  it('stops a column that looks like treatment, naming it', async () => {
    const problem = await dataManager.refused(uploadExtractOperation, { params: { studyId: study.studyId }, query, file: csv(openLabelFile('even')) })
    expect(problem).toMatchObject({ status: 422, code: 'treatment-column', errors: [{ row: 1, column: 'TRT01P', code: 'treatment-column', params: { column: 'TRT01P' } }] })
    const { extracts } = await study.as.monitor.client.call(listExtractsOperation, { params: { studyId: study.studyId } })
    expect(extracts.at(-1)).toMatchObject({ state: 'sealed', bytesHash: null, size: null })
  })

  it('refuses another kind of content and dates that are none', async () => {
    const file = { bytes: trialFile(), type: 'text/plain' }
    expect(await dataManager.refused(uploadExtractOperation, { params: { studyId: study.studyId }, query, file })).toMatchObject({ status: 415 })
    expect(await dataManager.refused(uploadExtractOperation, { params: { studyId: study.studyId }, query: { ...query, cutOff: '2026-02-30' }, file: csv(trialFile()) }))
      .toMatchObject({ status: 422, errors: [{ pointer: '/query/cutOff', code: 'not-a-date' }] })
  })

  it('names the limit when a file declares to be larger, before it is sent', async () => {
    const problem = await rawUpload(dataManager.cookie(), { declared: limit + 1, pieces: [] })
    expect(problem).toMatchObject({ status: 413, code: 'too-large', errors: [{ code: 'file-too-large', params: { maximum: limit } }] })
  })

  it('names the limit when a file turns out to be larger, and keeps none of it', async () => {
    const before = await serverDatabase().db.$count(blobChunk)
    const line = Buffer.from(`${trialFile().split('\n').slice(0, 2).join('\n')}\n`.repeat(2000))
    function* tooMuch() {
      for (let size = 0; size <= limit; size += line.length) yield line
    }
    const problem = await rawUpload(dataManager.cookie(), { pieces: tooMuch() })
    expect(problem).toMatchObject({ status: 413, code: 'too-large', errors: [{ code: 'file-too-large' }] })
    expect(await serverDatabase().db.$count(blobChunk)).toBe(before)
  })
})
