import { mountSuspended, registerEndpoint } from '@nuxt/test-utils/runtime'
import { createError, getHeader, getQuery, readBody } from 'h3'
import { describe, expect, it } from 'vitest'
import { defineComponent, h } from 'vue'
import { z } from 'zod'
import { useApi, useApiData } from '#imports'
import { defineOperation } from '#shared/contract/operation'

const params = z.strictObject({ studyId: z.string() })
const shared = { action: 'plan.read', scope: 'study', params, errors: [], example: {} } as const

const save = defineOperation({
  ...shared, id: 'trial.save', method: 'PUT', path: '/api/trial/[studyId]/plan', revision: true,
  query: z.strictObject({ kind: z.string() }), body: z.strictObject({ name: z.string() }), answer: z.unknown(),
})
const refused = defineOperation({ ...shared, id: 'trial.refused', method: 'GET', path: '/api/trial/[studyId]/refused', query: null, body: null, answer: z.strictObject({ name: z.string() }) })
const problem = { type: '/problems/wrong-state', title: 'wrong-state', status: 409, code: 'wrong-state', requestId: 'r-1', errors: [] }

registerEndpoint('/api/trial/s1/plan', {
  method: 'PUT',
  handler: async event => ({ query: getQuery(event), body: await readBody(event), revision: getHeader(event, 'if-match') }),
})
registerEndpoint('/api/trial/s1/refused', () => {
  throw createError({ statusCode: 409, data: problem })
})

/** What a composable gives inside a component. */
async function within<T>(setup: () => T): Promise<T> {
  let given: { value: T } | null = null
  await mountSuspended(defineComponent({
    setup() {
      given = { value: setup() }
      return () => h('div')
    },
  }))
  if (!given) throw new Error('the component did not mount')
  return (given as { value: T }).value
}

describe('useApi', () => {
  it('sends what the operation declares', async () => {
    const call = await within(() => useApi(save))
    expect(await call({ params: { studyId: 's1' }, query: { kind: 'true' }, body: { name: 'x' }, ifMatch: 3 }))
      .toEqual({ query: { kind: 'true' }, body: { name: 'x' }, revision: '"3"' })
  })

  it('throws a refusal with its code and request', async () => {
    const call = await within(() => useApi(refused))
    await expect(call({ params: { studyId: 's1' } })).rejects.toMatchObject({ name: 'ApiProblem', status: 409 })
  })
})

describe('useApiData', () => {
  it('holds the refusal as the page reads it', async () => {
    const reading = await within(() => useApiData(refused, { params: { studyId: 's1' } }))
    await reading
    expect(reading.data.value).toBeUndefined()
    expect(reading.error.value).toMatchObject({ statusCode: 409 })
  })
})
