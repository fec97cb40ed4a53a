import AxeBuilder from '@axe-core/playwright'
import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { makeStudyWithRoles } from '../helpers/server'
import { launch, open, signIn, type Person } from './browser'

type Cast = Awaited<ReturnType<typeof makeStudyWithRoles>>

let browser: Browser
let cast: Cast
beforeAll(async () => {
  browser = await launch()
  cast = await makeStudyWithRoles()
})
afterAll(() => browser?.close())

const ROOMS = ['plan', 'ledger', 'extracts', 'deviations', 'memos', 'record', 'people', 'settings']

/** What axe finds against WCAG 2.2 A and AA, by rule and place. */
async function faultsOf({ page }: Person): Promise<string[]> {
  const { violations } = await new AxeBuilder({ page }).withTags(['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa']).analyze()
  return violations.flatMap(({ id, nodes }) => nodes.map(({ target }) => `${id}: ${target.join(' ')}`))
}

describe.each([['light', 1360], ['dark', 1360], ['light', 390]] as const)('pages in the %s scheme at %i pixels', (scheme, width) => {
  it('can be used by everybody and scroll inside themselves', async () => {
    const person = await signIn(browser, cast.as.biostatistician, { width, dark: scheme === 'dark' })
    for (const path of ['/', ...ROOMS.map(room => `/studies/${cast.studyId}/${room}`)]) {
      await open(person.page, path)
      await person.page.getByRole('heading', { level: 1 }).waitFor()
      expect(await faultsOf(person), path).toEqual([])
      expect(await person.page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth), path).toBeLessThanOrEqual(0)
    }
    expect(person.faults).toEqual([])
    await person.context.close()
  })

  it('offers a way in that can be used by everybody', async () => {
    const context = await browser.newContext({ viewport: { width, height: 900 }, colorScheme: scheme })
    const page = await context.newPage()
    await open(page, '/login')
    expect(await faultsOf({ page, context, received: [], faults: [] })).toEqual([])
    await context.close()
  })
})
