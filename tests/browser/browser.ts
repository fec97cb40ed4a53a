import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core'
import { serverOrigin } from '../helpers/client'
import type { Account } from '../helpers/server'

const ARGUMENTS = ['--headless', '--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync']

export const launch = (): Promise<Browser> => chromium.launch({ executablePath: process.env.CHROMIUM_PATH ?? '/usr/bin/chromium', args: ARGUMENTS })

/** Somebody at a browser of their own: what arrived there, and what could not. */
export interface Person {
  readonly page: Page
  readonly context: BrowserContext
  /** Every text body that the server sent to this browser, with its address. */
  readonly received: { url: string, body: string }[]
  /** Errors on the page's console and requests that left the application. */
  readonly faults: string[]
}

/** Waits until Vue has taken the page over; a form filled before that loses its values. */
export const hydrated = (page: Page) => page.waitForFunction(() => {
  const root = document.querySelector('#__nuxt')
  return root !== null && '__vue_app__' in root
})

export async function open(page: Page, path: string): Promise<void> {
  await page.goto(serverOrigin() + path)
  await hydrated(page)
}

function watch(page: Page, received: Person['received'], faults: string[]): void {
  page.on('response', async (response) => {
    const type = response.headers()['content-type'] ?? ''
    if (!/json|html|text/.test(type) || type.includes('event-stream') || /\/_nuxt\//.test(response.url())) return
    const body = await response.text().catch(() => null)
    if (body !== null) received.push({ url: response.url(), body })
  })
  page.on('request', (request) => {
    if (!request.url().startsWith(serverOrigin()) && !/^(data|blob):/.test(request.url())) faults.push(`left the application: ${request.url()}`)
  })
  page.on('pageerror', error => faults.push(`page error: ${error.message}`))
}

export async function signIn(browser: Browser, account: Account, options: { width?: number, dark?: boolean } = {}): Promise<Person> {
  const context = await browser.newContext({
    viewport: { width: options.width ?? 1360, height: 1000 }, colorScheme: options.dark ? 'dark' : 'light', acceptDownloads: true,
  })
  const page = await context.newPage()
  page.setDefaultTimeout(15_000)
  const received: Person['received'] = []
  const faults: string[] = []
  watch(page, received, faults)
  await open(page, '/login')
  await page.getByLabel('E-mail address').fill(account.email)
  await page.getByLabel('Password').fill(account.password)
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.getByRole('heading', { name: 'Studies' }).waitFor()
  return { page, context, received, faults }
}

/** Fills the signing dialog in and signs; `reason` where the act asks for one. */
export async function sign(page: Page, account: Account, reason?: string): Promise<void> {
  const dialog = page.getByRole('dialog')
  await dialog.waitFor()
  if (reason !== undefined) await dialog.getByRole('textbox').first().fill(reason)
  await dialog.getByLabel('E-mail address').fill(account.email)
  await dialog.getByLabel('Password').fill(account.password)
  await dialog.getByRole('button', { name: 'Sign', exact: true }).click()
  await dialog.waitFor({ state: 'hidden' })
}
