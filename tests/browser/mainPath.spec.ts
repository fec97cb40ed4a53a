import { execFileSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { readStudyOperation } from '#shared/contract/studies'
import { LARKMOOR_CUTS, larkmoorFiles } from '../../server/demo/larkmoorData'
import { larkmoorPlan } from '../../server/demo/larkmoorPlan'
import { seededSource } from '../../server/demo/source'
import { LARKMOOR_SEED } from '../../server/demo/seeds'
import { makeStudyWithRoles } from '../helpers/server'
import { launch, open, sign, signIn, type Person } from './browser'

type Cast = Awaited<ReturnType<typeof makeStudyWithRoles>>
type Role = 'biostatistician' | 'reviewer' | 'dataManager' | 'cleared' | 'investigator' | 'monitor'

const folder = mkdtempSync(join(tmpdir(), 'stipule-'))
const { extracts, allocation } = larkmoorFiles(seededSource(LARKMOOR_SEED))
const lock = LARKMOOR_CUTS[2]

let browser: Browser
let cast: Cast
let protocolNumber: string
const people = new Map<Role, Person>()

beforeAll(async () => {
  browser = await launch()
  cast = await makeStudyWithRoles()
  const study = await cast.as.biostatistician.client.call(readStudyOperation, { params: { studyId: cast.studyId } })
  protocolNumber = study.protocolNumber
})

afterAll(async () => {
  await browser?.close()
  rmSync(folder, { recursive: true, force: true })
})

async function as(role: Role): Promise<Person> {
  const known = people.get(role)
  if (known) return known
  const person = await signIn(browser, cast.as[role])
  people.set(role, person)
  return person
}

const study = (path: string) => `/studies/${cast.studyId}${path}`
const csv = (name: string, content: string) => ({ name, mimeType: 'text/csv', buffer: Buffer.from(content) })

describe('the main path with six accounts', () => {
  it('registers a plan, signed by its author and by a reviewer', async () => {
    const { page } = await as('biostatistician')
    await open(page, study('/plan'))
    await page.getByRole('button', { name: 'Start a draft' }).click()
    const invented = larkmoorPlan(cast.as.investigator.email)
    const plan = { ...invented, protocol: { ...invented.protocol, number: protocolNumber } }
    await page.getByLabel('Read a plan file').setInputFiles({ name: 'plan.json', mimeType: 'application/json', buffer: Buffer.from(JSON.stringify(plan)) })
    await page.getByText('Nothing is missing.').waitFor()
    await page.getByRole('button', { name: 'Save draft' }).click()
    await page.getByText('Everything is saved.').waitFor()
    await page.getByRole('button', { name: 'Sign and lock plan' }).click()
    await sign(page, cast.as.biostatistician)
    await page.getByText('awaiting the reviewer').first().waitFor()

    const reviewer = (await as('reviewer')).page
    await open(reviewer, new URL(page.url()).pathname)
    await reviewer.getByRole('button', { name: 'Approve under signature' }).click()
    await sign(reviewer, cast.as.reviewer)
    await reviewer.getByText('signed, in force').first().waitFor()
  })

  it('takes an extract in and seals the allocation list', async () => {
    const { page } = await as('dataManager')
    await open(page, study('/extracts'))
    await page.getByLabel('File').setInputFiles(csv(lock.name, extracts[2]!))
    await page.getByLabel('Cut-off date').fill(lock.cutOff)
    await page.getByLabel('Purpose').selectOption('database-lock')
    await page.getByRole('button', { name: 'Upload' }).click()
    await page.getByRole('heading', { name: 'Extract 1' }).waitFor()

    const cleared = (await as('cleared')).page
    await open(cleared, study('/extracts'))
    await cleared.getByLabel('File').setInputFiles(csv('allocation.csv', allocation))
    await cleared.getByRole('button', { name: 'Seal allocation list' }).click()
    await cleared.getByText('in use when newest').waitFor()
  })

  it('locks the database, then releases what the others will see', async () => {
    const { page: blinded } = await as('biostatistician')
    await expect.poll(async () => {
      await open(blinded, study('/ledger'))
      return blinded.getByRole('cell').getByText('held behind the blind').count()
    }, { timeout: 60_000, interval: 1500 }).toBe(4)

    const { page } = await as('dataManager')
    await open(page, study('/settings'))
    await page.getByLabel('Extract').selectOption({ index: 1 })
    await page.getByRole('button', { name: 'Lock database' }).click()
    await sign(page, cast.as.dataManager)
    await page.getByText('Database locked').first().waitFor()

    const cleared = (await as('cleared')).page
    await open(cleared, study('/ledger'))
    await cleared.getByRole('link', { name: /Database lock/ }).click()
    await cleared.getByRole('link', { name: 'Release verdicts' }).click()
    await cleared.getByRole('button', { name: 'Release under signature' }).click()
    await sign(cleared, cast.as.cleared)
    await cleared.getByText('Released.').first().waitFor()
  })

  it('shows the released verdicts in the ledger', async () => {
    const { page } = await as('biostatistician')
    await open(page, study('/ledger'))
    const cells = page.getByRole('table').getByRole('link')
    await cells.getByText('Welch t').first().waitFor()
    const text = await page.getByRole('table').innerText()
    expect(text).toMatch(/Evening cough count[\s\S]*Welch t/)
    expect(text).toMatch(/hs-CRP[\s\S]*log/)
    expect(text).toMatch(/Rescue doses[\s\S]*no registered method/)
  })

  it('is acknowledged by the named investigator', async () => {
    const { page } = await as('investigator')
    await open(page, study('/deviations'))
    await page.getByRole('row').filter({ hasText: 'Evening cough count' }).getByRole('link').first().click()
    await page.getByRole('button', { name: 'Acknowledge' }).click()
    await sign(page, cast.as.investigator)
    await page.getByText('acknowledged').first().waitFor()
  })

  it('is settled by a biostatistician, who signs the memo', async () => {
    const { page } = await as('reviewer')
    await open(page, study('/deviations'))
    await page.getByRole('row').filter({ hasText: 'Evening cough count' }).getByRole('link').first().click()
    await page.getByLabel('Settle by').selectOption('accept-step')
    await page.getByRole('button', { name: 'Settle under signature' }).click()
    await sign(page, cast.as.reviewer, 'The registered step was foreseen for unequal spread.')
    await open(page, study('/memos'))
    await page.getByRole('link', { name: 'Memo 1' }).click()
    await page.getByRole('button', { name: 'Sign memo' }).click()
    await sign(page, cast.as.reviewer)
    await page.getByText(/being made|issued/).first().waitFor()
  })

  it('ends in a signed memo that the monitor downloads and pdfsig calls valid', async () => {
    const { page } = await as('monitor')
    await open(page, study('/memos'))
    const link = page.getByRole('link', { name: 'Download PDF' })
    await link.waitFor({ timeout: 60_000 })
    const [download] = await Promise.all([page.waitForEvent('download'), link.click()])
    const path = join(folder, 'memo.pdf')
    await download.saveAs(path)
    const verdict = execFileSync('pdfsig', [path], { encoding: 'utf8' })
    expect(verdict).toContain('Signature is Valid')
    expect(verdict).toContain('Total document signed')
    expect(execFileSync('pdftotext', [path, '-'], { encoding: 'utf8' })).toContain(protocolNumber)
  })

  it('let nothing about arms reach those who are not cleared, and nothing leave the application', () => {
    const arms = allocation.trim().split('\n').slice(1).map(line => line.split(',') as [string, string])
    expect(arms.length).toBe(144)
    for (const role of ['biostatistician', 'reviewer', 'dataManager', 'investigator', 'monitor'] as const) {
      const { received, faults } = people.get(role)!
      expect(faults).toEqual([])
      expect(received.length).toBeGreaterThan(3)
      for (const { url, body } of received) {
        const traced = arms.filter(([subject, arm]) => new RegExp(`${subject}[^A-Za-z0-9]{1,40}(${arm})\\b`).test(body))
        expect(traced, url).toEqual([])
        expect(body, url).not.toMatch(/"byArm":\[/)
      }
    }
  })

  it('downloads a memo whose bytes cannot be changed unnoticed', () => {
    const bytes = readFileSync(join(folder, 'memo.pdf'))
    const at = bytes.indexOf('stream', 2000) + 40
    bytes[at] = bytes[at]! ^ 1
    const path = join(folder, 'changed.pdf')
    writeFileSync(path, bytes)
    expect(execFileSync('pdfsig', [path], { encoding: 'utf8' })).not.toContain('Signature is Valid')
  })
})
