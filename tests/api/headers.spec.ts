import supertest from 'supertest'
import { describe, expect, it } from 'vitest'
import { serverOrigin } from '../helpers/client'

const server = () => supertest(serverOrigin())

describe('what every answer carries', () => {
  it('lets pages load nothing from elsewhere and be framed by nobody', async () => {
    const { headers } = await server().get('/login').expect(200)
    const policy = String(headers['content-security-policy'])
    expect(policy).toContain('default-src \'self\'')
    expect(policy).toContain('frame-ancestors \'none\'')
    expect(policy).toContain('object-src \'none\'')
    expect(policy).not.toMatch(/https?:/)
    expect(headers['x-content-type-options']).toBe('nosniff')
    expect(headers['access-control-allow-origin']).toBeUndefined()
  })

  it('answers unknown addresses of the interface with a problem', async () => {
    const { body } = await server().get('/api/nothing/here').expect(404).expect('content-type', /application\/problem\+json/)
    expect(body).toMatchObject({ type: '/problems/not-found', status: 404, code: 'not-found' })
    expect(body.requestId).toBeTruthy()
  })

  it('sets its cookies out of reach of scripts and of other sites', async () => {
    const { headers } = await server().get('/api/auth/csrf').expect(200)
    const cookies = [headers['set-cookie']].flat().map(String)
    expect(cookies.length).toBeGreaterThan(0)
    for (const cookie of cookies) expect(cookie).toMatch(/HttpOnly.*SameSite=Lax|SameSite=Lax.*HttpOnly/i)
  })

  it('publishes its description', async () => {
    const { body } = await server().get('/api/openapi.json').expect(200)
    expect(Object.keys(body.paths).length).toBeGreaterThan(30)
  })
})
