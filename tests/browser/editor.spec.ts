import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { createPlanOperation, readPlanOperation } from '#shared/contract/plans'
import type { Plan } from '#shared/plan/schema'
import { readStudyOperation } from '#shared/contract/studies'
import { thorneyPlan } from '../../server/demo/thorneyPlan'
import { makeStudyWithRoles } from '../helpers/server'
import { launch, open, sign, signIn } from './browser'

let browser: Browser
beforeAll(async () => {
  browser = await launch()
})
afterAll(() => browser?.close())

describe('the plan editor', () => {
  it('takes a planned analysis with its order by hand, says at once what is missing, and signs what was saved', async () => {
    const { studyId, as: { biostatistician: author, investigator } } = await makeStudyWithRoles()
    const { protocolNumber } = await author.client.call(readStudyOperation, { params: { studyId } })
    const invented = thorneyPlan(investigator.email)
    const document = { ...invented, protocol: { ...invented.protocol, number: protocolNumber } }
    const { id: planId } = await author.client.call(createPlanOperation, { params: { studyId }, body: { amendmentReason: null, document } })

    const { page, faults } = await signIn(browser, author)
    await open(page, `/studies/${studyId}/plan/${planId}`)
    await page.getByText('Nothing is missing.').waitFor()
    await page.getByRole('button', { name: 'Add a planned analysis' }).click()
    await page.getByText('/analyses/2/label').waitFor()
    const card = page.locator('form section section').last()
    await card.getByLabel('Label').first().fill('Grip strength by hand')
    await card.getByLabel('Planned method').selectOption('paired-t')
    await page.getByText('/analyses/2/comparison/first').waitFor()
    await card.getByLabel('First occasion').selectOption('Baseline')
    await card.getByLabel('Second occasion').selectOption('Month 3')
    await card.getByLabel('Endpoint').selectOption('GRIP')
    await card.getByLabel('Another step').selectOption('wilcoxon-signed-rank')
    await card.getByRole('button', { name: 'Add', exact: true }).last().click()
    await page.getByText('Nothing is missing.').waitFor()
    await page.getByRole('button', { name: 'Save draft' }).click()
    await page.getByText('Everything is saved.').waitFor()

    const saved = await author.client.call(readPlanOperation, { params: { studyId, planId } })
    expect((saved.document as Plan).analyses.map(({ label, method }) => [label, method])).toContainEqual(['Grip strength by hand', 'paired-t'])
    expect((saved.document as Plan).analyses[2]!.fallbacks.map(({ method }) => method)).toEqual(['wilcoxon-signed-rank'])
    expect((saved.document as Plan).analyses[2]!.prerequisites.map(({ kind }) => kind)).toEqual(['normality', 'count', 'missing-values'])

    await page.getByRole('button', { name: 'Sign and lock plan' }).click()
    const dialog = page.getByRole('dialog')
    await dialog.getByLabel('E-mail address').fill(author.email)
    await dialog.getByLabel('Password').fill('not the password')
    await dialog.getByRole('button', { name: 'Sign', exact: true }).click()
    await dialog.getByText('The signature was refused').waitFor()
    await sign(page, author)
    await page.getByText('awaiting the reviewer').first().waitFor()
    expect(faults).toEqual([])
  })
})
