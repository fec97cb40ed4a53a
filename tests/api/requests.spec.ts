import { beforeAll, describe, expect, it } from 'vitest'
import { createPersonOperation } from '#shared/contract/people'
import { createStudyOperation, listStudiesOperation, readStudyOperation } from '#shared/contract/studies'
import type { Problem } from '#shared/contract/problems'
import { catalogue } from '#shared/wording/catalogue'
import type { Client } from '../helpers/client'
import { makeClient } from '../helpers/server'

const study = { protocolNumber: 'REQ-1', title: 'A study', phase: '2', sponsor: 'Example Sponsor' } as const

describe('requests that cannot be accepted', () => {
  let administrator: Client

  beforeAll(async () => {
    administrator = (await makeClient({ administrator: true })).client
  })

  const post = async (body: BodyInit, headers: Record<string, string> = {}): Promise<Problem> => {
    const response = await administrator.request('/api/studies', { method: 'POST', body, headers: { 'content-type': 'application/json', ...headers } })
    expect(response.headers.get('content-type')).toBe('application/problem+json')
    return await response.json() as Problem
  }

  it.each([
    ['broken JSON', '{"title": ', {}, 400, 'unreadable-request'],
    ['bytes that are no UTF-8', new Uint8Array([0x22, 0xFF, 0x22]), {}, 400, 'unreadable-request'],
    ['a form', 'title=x', { 'content-type': 'application/x-www-form-urlencoded' }, 415, 'unsupported-media-type'],
    ['plain text', '{}', { 'content-type': 'text/plain' }, 415, 'unsupported-media-type'],
    ['another origin', '{}', { origin: 'https://elsewhere.example' }, 403, 'foreign-origin'],
    ['an opaque origin', '{}', { origin: 'null' }, 403, 'foreign-origin'],
    ['more than two megabytes', JSON.stringify({ title: 'x'.repeat(2_100_000) }), {}, 413, 'too-large'],
  ])('refuses %s', async (_, body, headers: Record<string, string>, status, code) => {
    expect(await post(body, headers)).toMatchObject({ status, code, type: `/problems/${code}` })
  })

  it('names every fault with its place', async () => {
    const { status, errors } = await post(JSON.stringify({ title: '  ', phase: '9', sponsor: 'x'.repeat(121), extra: 1 }))
    expect(status).toBe(422)
    expect(errors).toEqual(expect.arrayContaining([
      { pointer: '/protocolNumber', code: 'required' },
      { pointer: '/title', code: 'required', params: { minimum: 1 } },
      expect.objectContaining({ pointer: '/phase', code: 'not-in-list' }),
      { pointer: '/sponsor', code: 'too-long', params: { maximum: 120 } },
      { pointer: '/extra', code: 'unknown-field' },
    ]))
    expect(errors).toHaveLength(5)
  })

  it('refuses what an operation without query or body does not expect', async () => {
    const response = await administrator.request('/api/studies?page=2')
    expect((await response.json() as Problem).errors).toEqual([{ pointer: '/query/page', code: 'unknown-field' }])
  })

  it('answers unknown paths and methods as problems', async () => {
    for (const [method, path, status, code] of [
      ['GET', '/api/nothing-here', 404, 'not-found'],
      ['GET', '/api/studies/x/y/z', 404, 'not-found'],
      ['DELETE', '/api/studies', 405, 'method-not-allowed'],
      ['POST', '/api/health', 405, 'method-not-allowed'],
    ] as const) {
      const response = await administrator.request(path, { method })
      expect([path, response.status]).toEqual([path, status])
      expect(await response.json()).toMatchObject({ status, code, errors: [] })
    }
    expect((await administrator.request('/api/studies', { method: 'DELETE' })).headers.get('allow')?.split(', ').sort()).toEqual(['GET', 'POST'])
  })

  it('answers an unknown page with a page', async () => {
    const response = await administrator.request('/no-such-page', { headers: { accept: 'text/html' } })
    expect(response.status).toBe(404)
    expect(response.headers.get('content-type')).toContain('text/html')
    expect(await response.text()).toContain(catalogue.en.base.errorPage.notFound)
  })

  it('reads an identifier that is none like a study that is not there', async () => {
    const member = (await makeClient()).client
    expect(await member.refused(readStudyOperation, { params: { studyId: 'not-an-id' } })).toMatchObject({ status: 404, code: 'not-found' })
  })

  it('gives each request its own id', async () => {
    const ids = await Promise.all([1, 2].map(async () => (await administrator.send(listStudiesOperation)).headers.get('x-request-id')))
    expect(new Set(ids).size).toBe(2)
  })

  it('keeps answers out of caches', async () => {
    expect((await administrator.send(listStudiesOperation)).headers.get('cache-control')).toBe('no-store')
  })

  it('says that a protocol number or an address is taken, at its field', async () => {
    const body = { ...study, protocolNumber: `REQ-${Date.now()}` }
    await administrator.call(createStudyOperation, { body })
    expect(await administrator.refused(createStudyOperation, { body }))
      .toMatchObject({ status: 409, code: 'already-done', errors: [{ pointer: '/protocolNumber', code: 'protocol-number-taken' }] })
    const person = { name: 'Twice Invited', email: `twice-${Date.now()}@example.org`, installationRole: null }
    await administrator.call(createPersonOperation, { body: person })
    expect(await administrator.refused(createPersonOperation, { body: { ...person, email: person.email.toUpperCase() } }))
      .toMatchObject({ status: 409, errors: [{ pointer: '/email', code: 'email-taken' }] })
  })
})
