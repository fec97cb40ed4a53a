import { createServer, type Server } from 'node:http'
import type { AddressInfo } from 'node:net'
import { createApp, createRouter, defineEventHandler, toNodeListener } from 'h3'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { z } from 'zod'
import { defineOperation } from '#shared/contract/operation'
import { DomainError } from '../../../server/domainError'
import { readInput, readRevision } from '../../../server/utils/readInput'

const operation = defineOperation({
  id: 'test.put', method: 'PUT', path: '/things/[thingId]', action: 'own.read', scope: 'installation', revision: true,
  params: z.strictObject({ thingId: z.string().max(3) }), query: z.strictObject({ page: z.coerce.number().int().default(1) }),
  body: z.strictObject({ name: z.string() }), answer: null, errors: [], example: {},
})

/** Reads a real request as a route would, and answers with what was read or why it was refused. */
const app = createApp().use(createRouter().put('/things/:thingId', defineEventHandler(async (event) => {
  try {
    return { ...await readInput(event, operation), revision: readRevision(event) }
  }
  catch (error) {
    if (error instanceof DomainError) return { code: error.code, errors: error.errors }
    throw error
  }
})))

describe('readInput', () => {
  let server: Server
  let origin: string

  beforeAll(async () => {
    server = createServer(toNodeListener(app))
    await new Promise<void>(resolve => server.listen(0, '127.0.0.1', resolve))
    origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`
  })
  afterAll(() => new Promise(resolve => server.close(resolve)))

  const put = async (path: string, body: BodyInit | null, headers: Record<string, string> = { 'if-match': '"3"' }) =>
    (await fetch(origin + path, { method: 'PUT', body, headers })).json()

  it('gives path, query with its defaults, body and revision', async () => {
    expect(await put('/things/a%20b', '{"name":"x"}')).toEqual({ params: { thingId: 'a b' }, query: { page: 1 }, body: { name: 'x' }, revision: 3 })
    expect(await put('/things/a?page=7', '{"name":"x"}')).toMatchObject({ query: { page: 7 } })
  })

  it('lists the faults of all three at once', async () => {
    expect(await put('/things/abcd?page=x&page=y&size=1', '{"name":1,"more":2}')).toEqual({
      code: 'invalid-input',
      errors: [
        { pointer: '/params/thingId', code: 'too-long', params: { maximum: 3 } },
        { pointer: '/query/page', code: 'wrong-type', params: { expected: 'number' } },
        { pointer: '/query/size', code: 'unknown-field' },
        { pointer: '/name', code: 'wrong-type', params: { expected: 'string' } },
        { pointer: '/more', code: 'unknown-field' },
      ],
    })
  })

  it('names a body that was not sent', async () => {
    expect(await put('/things/a', null)).toEqual({ code: 'invalid-input', errors: [{ pointer: '', code: 'required' }] })
  })

  it.each([
    ['no If-Match', {}, 'revision-missing'],
    ['any revision', { 'if-match': '*' }, 'unreadable-request'],
    ['a weak tag', { 'if-match': 'W/"3"' }, 'unreadable-request'],
    ['a bare number', { 'if-match': '3' }, 'unreadable-request'],
    ['a huge number', { 'if-match': '"12345678901"' }, 'unreadable-request'],
  ])('refuses %s', async (_, headers, code) => {
    expect(await put('/things/a', '{"name":"x"}', headers)).toMatchObject({ code })
  })

  it('stops reading a body beyond its limit', async () => {
    expect(await put('/things/a', `{"name":"${'x'.repeat(2_100_000)}"}`)).toMatchObject({ code: 'too-large' })
  })
})
