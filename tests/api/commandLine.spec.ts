import { spawnSync } from 'node:child_process'
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { uploadAllocationOperation } from '#shared/contract/allocations'
import { readExtractOperation, uploadExtractOperation } from '#shared/contract/extracts'
import { readArmsOperation, readReportOperation } from '#shared/contract/ledger'
import { createPlanOperation, reviewPlanOperation, signPlanAsAuthorOperation } from '#shared/contract/plans'
import { readStudyOperation } from '#shared/contract/studies'
import type { SeenAnalysis, SeenReport } from '#shared/decision/report'
import type { Plan } from '#shared/plan/schema'
import { LARKMOOR_CUTS, larkmoorFiles } from '../../server/demo/larkmoorData'
import { larkmoorPlan } from '../../server/demo/larkmoorPlan'
import { LARKMOOR_SEED, THORNEY_SEED } from '../../server/demo/seeds'
import { seededSource } from '../../server/demo/source'
import { THORNEY_CUT, thorneyFile } from '../../server/demo/thorneyData'
import { thorneyPlan } from '../../server/demo/thorneyPlan'
import { makeStudyWithRoles } from '../helpers/server'

const folder = mkdtempSync(join(tmpdir(), 'stipule-check-'))
afterAll(() => rmSync(folder, { recursive: true, force: true }))

const entry = fileURLToPath(new URL('../../.output/server/check.mjs', import.meta.url))
const { extracts, allocation } = larkmoorFiles(seededSource(LARKMOOR_SEED))
const lock = LARKMOOR_CUTS[2]

function file(name: string, content: string): string {
  const path = join(folder, name)
  writeFileSync(path, content)
  return path
}

/** The command as a person runs it. */
function check(...args: string[]): { code: number | null, out: string, err: string } {
  const { status, stdout, stderr } = spawnSync(process.execPath, [entry, ...args], { encoding: 'utf8' })
  return { code: status, out: stdout, err: stderr }
}

const reportOf = (out: string) => (JSON.parse(out) as { report: SeenReport }).report

/** Figures, words and steps of an analysis; what may differ is only whether it stands in the ledger. */
const told = ({ released: _released, ...analysis }: SeenAnalysis) => analysis

async function studyWith(plan: (investigator: string) => Plan) {
  const cast = await makeStudyWithRoles()
  const { studyId, as } = cast
  const { protocolNumber } = await as.biostatistician.client.call(readStudyOperation, { params: { studyId } })
  const invented = plan(as.investigator.email)
  const document = { ...invented, protocol: { ...invented.protocol, number: protocolNumber } }
  const draft = await as.biostatistician.client.call(createPlanOperation, { params: { studyId }, body: { amendmentReason: null, document } })
  const credentials = ({ email, password }: { email: string, password: string }) => ({ identifier: email, password })
  const params = { studyId, planId: draft.id }
  const signed = await as.biostatistician.client.call(signPlanAsAuthorOperation, { params, revision: draft.revision, body: { ...credentials(as.biostatistician), declaration: { firstSubjectIn: null, dataSeen: 'none' } } })
  if (signed.state === 'awaiting-reviewer') await as.reviewer.client.call(reviewPlanOperation, { params, body: { ...credentials(as.reviewer), decision: 'approve', reason: null } })
  return { ...cast, document }
}

async function judged(cast: Awaited<ReturnType<typeof studyWith>>, cut: { name: string, cutOff: string, purpose: 'interim' | 'database-lock' }, content: string) {
  const { studyId, as } = cast
  const { id } = await as.dataManager.client.call(uploadExtractOperation, { params: { studyId }, query: { fileName: cut.name, cutOff: cut.cutOff, purpose: cut.purpose }, file: { bytes: content, type: 'text/csv' } })
  const params = { studyId, extractId: id }
  await expect.poll(async () => (await as.dataManager.client.call(readExtractOperation, { params })).state, { timeout: 30_000, interval: 300 }).toBe('checked')
  return params
}

describe('the command line beside the stored report', () => {
  let plan: string
  beforeAll(() => {
    plan = file('larkmoor.json', JSON.stringify(larkmoorPlan('tomas@larkmoor.example')))
  })

  it('agrees figure by figure in an open-label study', async () => {
    const cast = await studyWith(thorneyPlan)
    const params = await judged(cast, THORNEY_CUT, thorneyFile(seededSource(THORNEY_SEED)))
    const stored = await cast.as.biostatistician.client.call(readReportOperation, { params })
    const { code, out } = check('--plan', file('thorney.json', JSON.stringify(cast.document)), '--extract', file('thorney.csv', thorneyFile(seededSource(THORNEY_SEED))), '--cut-off', THORNEY_CUT.cutOff, '--json')
    expect(code).toBe(3)
    expect(reportOf(out).plan).toEqual(stored.plan)
    expect(reportOf(out).extract.contentHash).toBe(stored.extract.contentHash)
    // Counts against a look's expectation need the look; the command line has none.
    expect(reportOf(out).analyses.map(({ analysis }) => analysis)).toEqual(stored.analyses.map(({ analysis }) => analysis))
    expect(reportOf(out).analyses.map(({ proxy, byArm, plot, prerequisites }) => ({ proxy, byArm, plot, shape: prerequisites.filter(({ kind }) => kind !== 'count') })))
      .toEqual(stored.analyses.map(({ proxy, byArm, plot, prerequisites }) => ({ proxy, byArm, plot, shape: prerequisites.filter(({ kind }) => kind !== 'count') })))
  })

  it('agrees figure by figure, arms included, in a blinded one', async () => {
    const cast = await studyWith(larkmoorPlan)
    const { studyId, as } = cast
    await as.cleared.client.call(uploadAllocationOperation, { params: { studyId }, query: { kind: 'true' }, file: { bytes: allocation, type: 'text/csv' } })
    const params = await judged(cast, lock, extracts[2]!)
    const { code, out } = check('--plan', file('blinded.json', JSON.stringify(cast.document)), '--extract', file('lock.csv', extracts[2]!), '--allocation', file('allocation.csv', allocation), '--arms', '--json', '--purpose', 'database-lock', '--cut-off', lock.cutOff)
    expect(code).toBe(3)
    for (const analysis of reportOf(out).analyses) {
      const { seen } = await as.cleared.client.call(readArmsOperation, { params: { ...params, analysis: analysis.analysis } })
      expect(told(analysis)).toEqual(told(seen))
    }
  })

  it('answers a blinded plan without --arms by 5, and says nothing of arms', () => {
    const given = ['--plan', plan, '--extract', file('lock.csv', extracts[2]!), '--purpose', 'database-lock']
    const bare = check(...given, '--json')
    const listed = check(...given, '--allocation', file('allocation.csv', allocation), '--json')
    expect([bare.code, listed.code]).toEqual([5, 5])
    const swapped = allocation.replaceAll('HIGH', 'x').replaceAll('PBO', 'HIGH').replaceAll('x', 'PBO')
    expect(check(...given, '--allocation', file('swapped.csv', swapped), '--json').out).toBe(listed.out)
    expect(listed.out).not.toMatch(/"byArm":\[/)
  })

  it.each([
    ['a missing plan', 'nowhere.json', null, 'nowhere.json'],
    ['a file that is no CSV of the plan', null, 'a,b\n1,2\n', 'row 1'],
    ['an empty file', null, '', 'broken.csv'],
    ['a treatment column', null, `TRT01P,${extracts[0]!.split('\n')[0]}\nHIGH,${extracts[0]!.split('\n')[1]}\n`, 'TRT01P'],
    ['text in a number', null, extracts[0]!.replace(/,Week 12,[\d.]+,/, ',Week 12,<5,'), 'AVAL'],
  ])('answers %s by 2 and names the place', (_what, planPath, content, place) => {
    const { code, err } = check('--plan', planPath ?? plan, '--extract', file('broken.csv', content ?? ''))
    expect(code).toBe(2)
    expect(err).toContain(place)
  })
})
