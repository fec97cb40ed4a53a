import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { healthOperation } from '#shared/contract/health'
import type { Problem } from '#shared/contract/problems'
import { viewerOperation } from '#shared/contract/session'
import { catalogue } from '#shared/wording/catalogue'
import { Client } from '../helpers/client'
import { fromEnvironment } from '../helpers/database'
import { Gate, startServer, type OwnServer } from '../helpers/ownServer'
import { makePerson } from '../helpers/server'

describe('a database that goes away', () => {
  const gate = new Gate(new URL(fromEnvironment('DATABASE_URL')))
  let server: OwnServer
  let client: Client

  beforeAll(async () => {
    await gate.open()
    server = await startServer({ DATABASE_URL: gate.url })
    client = new Client(server.origin)
    expect((await client.signIn(await makePerson())).status).toBe(200)
  })
  afterAll(async () => {
    await server.stop()
    await gate.shut()
  })

  const until = async (wanted: number) => {
    for (let attempt = 0; attempt < 50; attempt++) {
      const { status } = await client.send(healthOperation)
      if (status === wanted) return
      await new Promise(resolve => setTimeout(resolve, 100))
    }
    throw new Error(`health never answered ${wanted}`)
  }

  it('is answered with 503 that says so, at once, and served again without a restart', async () => {
    expect((await client.send(viewerOperation)).status).toBe(200)
    for (let round = 0; round < 2; round++) {
      await gate.shut()
      const started = Date.now()
      const response = await client.send(viewerOperation)
      expect(Date.now() - started).toBeLessThan(6000)
      expect(response.status).toBe(503)
      expect(Number(response.headers.get('retry-after'))).toBeGreaterThan(0)
      expect(await response.json() as Problem).toMatchObject({ code: 'database-unavailable', errors: [] })
      expect((await client.refused(healthOperation)).status).toBe(503)
      await gate.open()
      await until(200)
      expect((await client.call(viewerOperation)).memberships).toEqual([])
    }
  })

  it('refuses a sign-in with 503 and leaves sessions as they are', async () => {
    const account = await makePerson()
    await gate.shut()
    const session = await client.request('/api/auth/session')
    expect(session.status).toBe(503)
    expect(session.headers.getSetCookie().filter(cookie => cookie.includes('session-token'))).toEqual([])
    const response = await new Client(server.origin).signIn(account)
    expect(response.status).toBe(503)
    expect(await response.text()).not.toMatch(/select|insert|ECONN/i)
    await gate.open()
    await until(200)
    expect((await client.send(viewerOperation)).status).toBe(200)
  })

  it('is told on a page as well', async () => {
    await gate.shut()
    const page = await client.request('/', { headers: { accept: 'text/html' } })
    expect(page.status).toBe(503)
    expect(page.headers.get('content-type')).toContain('text/html')
    expect(await page.text()).toContain(catalogue.en.base.errorPage.unavailable)
    await gate.open()
    await until(200)
    expect((await client.request('/', { headers: { accept: 'text/html' } })).status).toBe(200)
  })

  it('stays a matter of codes in the log', () => {
    expect(server.output()).not.toMatch(/select |insert |@example\.org/i)
  })
})

describe('a database role that must not serve', () => {
  it('ends the server, naming the fault', async () => {
    const server = await startServer({ DATABASE_URL: fromEnvironment('MIGRATION_DATABASE_URL') })
    const code = server.process.exitCode ?? await new Promise(resolve => server.process.once('exit', resolve))
    expect(code).toBe(1)
    expect(server.output()).toMatch(/"fault":"(superuser|owns-tables)"/)
  })

  it('ends the server too where nothing has been migrated', async () => {
    const empty = Object.assign(new URL(fromEnvironment('DATABASE_URL')), { pathname: '/postgres' }).href
    const server = await startServer({ DATABASE_URL: empty })
    const code = server.process.exitCode ?? await new Promise(resolve => server.process.once('exit', resolve))
    expect(code).toBe(1)
    expect(server.output()).toContain('"fault":"not-migrated"')
  })
})

describe('a configuration with faults', () => {
  it('ends the server, naming every entry and no value', async () => {
    const server = await startServer({ STIPULE_SMTP_URL: '', STIPULE_DEMO: 'perhaps', STIPULE_UPLOAD_LIMIT: 'much' })
    const code = server.process.exitCode ?? await new Promise(resolve => server.process.once('exit', resolve))
    expect(code).not.toBe(0)
    expect(server.output()).toContain('STIPULE_SMTP_URL missing')
    expect(server.output()).toContain('STIPULE_DEMO malformed')
    expect(server.output()).toContain('STIPULE_UPLOAD_LIMIT malformed')
    expect(server.output()).not.toMatch(/perhaps|much/)
  })
})
