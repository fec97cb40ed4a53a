import { beforeAll, describe, expect, it } from 'vitest'
import { ACTIONS, type Exposure, type StudyRole } from '#shared/access/actions'
import { operations } from '#shared/contract/index'
import { isMedia, type Operation } from '#shared/contract/operation'
import type { Problem } from '#shared/contract/problems'
import { addressOf, signedOut, type Client } from '../helpers/client'
import { makeStudy, makeStudyWithRoles } from '../helpers/server'

/**
 * Every operation × every role × own study, another study, signed out. Each request carries a query key that no
 * operation knows: whoever may act reads 422 for it, since permission is decided before input is looked at, and
 * nothing is done.
 */
const WALKERS = {
  'administrator': { role: null, cleared: false },
  'data manager': { role: 'data-manager', cleared: false },
  'biostatistician': { role: 'biostatistician', cleared: false },
  'cleared biostatistician': { role: 'biostatistician', cleared: true },
  'investigator': { role: 'investigator', cleared: false },
  'monitor': { role: 'monitor', cleared: false },
} as const satisfies Record<string, { role: StudyRole | null, cleared: boolean }>

type Walker = keyof typeof WALKERS
type Place = 'own study' | 'other study'

interface Expected { readonly status: number, readonly code: string }

const admitted: Expected = { status: 422, code: 'invalid-input' }
const absent: Expected = { status: 404, code: 'not-found' }
const forbidden: Expected = { status: 403, code: 'not-permitted' }

/** What the table of role × action says, read independently of the code that enforces it. The study is blinded. */
function expectation({ action, scope }: Operation, walker: Walker, place: Place): Expected {
  if (typeof action !== 'string') return admitted
  const rule: { roles: readonly string[] | 'signed-in', exposure: Exposure } = ACTIONS[action]
  const { role, cleared } = WALKERS[walker]
  if (rule.roles === 'signed-in') return admitted
  if (role === null) return rule.roles.includes('administrator') ? admitted : scope === 'study' ? absent : forbidden
  if (scope === 'installation') return forbidden
  if (place === 'other study') return absent
  if (!rule.roles.includes(role) || (rule.exposure === 'cleared' && !cleared)) return forbidden
  return rule.exposure === 'unexposed' && cleared ? { status: 403, code: 'exposed' } : admitted
}

function contentTypeOf({ body, method }: Operation): Record<string, string> {
  if (method === 'GET') return {}
  const [type = 'application/json'] = body !== null && isMedia(body) ? body.types : []
  return { 'content-type': type }
}

async function visit(client: Client, operation: Operation, studyId: string): Promise<Expected> {
  const params = { ...(operation.example.params as object | undefined), studyId }
  const path = addressOf(operation, { params, query: { 'walk-test': 'x' } })
  const response = await client.request(path, { method: operation.method, headers: contentTypeOf(operation) })
  expect(response.headers.get('content-type'), `${operation.method} ${path}`).toBe('application/problem+json')
  const { status, code, requestId } = await response.json() as Problem
  expect(status).toBe(response.status)
  expect(requestId).toBe(response.headers.get('x-request-id'))
  return { status, code }
}

describe('every operation, by every role', () => {
  let own: string
  let other: string
  let clients: Record<Walker, Client>

  beforeAll(async () => {
    const { studyId, as } = await makeStudyWithRoles()
    own = studyId
    other = await makeStudy(as.administrator.client)
    clients = {
      'administrator': as.administrator.client,
      'data manager': as.dataManager.client,
      'biostatistician': as.biostatistician.client,
      'cleared biostatistician': as.cleared.client,
      'investigator': as.investigator.client,
      'monitor': as.monitor.client,
    }
  })

  describe.each(operations.map(operation => [operation.id, operation] as const))('%s', (_, operation) => {
    it.each(Object.keys(WALKERS) as Walker[])('%s', async (walker) => {
      expect(await visit(clients[walker], operation, own), 'own study').toEqual(expectation(operation, walker, 'own study'))
      expect(await visit(clients[walker], operation, other), 'other study').toEqual(expectation(operation, walker, 'other study'))
    })

    it('signed out', async () => {
      const expected = typeof operation.action === 'string' ? { status: 401, code: 'not-signed-in' } : admitted
      expect(await visit(signedOut(), operation, own)).toEqual(expected)
    })
  })
})
