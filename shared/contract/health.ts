import { z } from 'zod'
import { defineOperation } from './operation'

/** Answers 503 `database-unavailable` while the database is away. */
export const healthOperation = defineOperation({
  id: 'health.read', method: 'GET', path: '/api/health', action: { public: 'a supervisor asks without an account; the answer tells nothing else' },
  scope: 'installation', params: null, query: null, body: null, answer: z.strictObject({ status: z.literal('ready') }), errors: [],
  example: { answer: { status: 'ready' } },
})

export const openApiOperation = defineOperation({
  id: 'openapi.read', method: 'GET', path: '/api/openapi.json', action: { public: 'the description of the interface holds no data' },
  scope: 'installation', params: null, query: null, body: null, answer: { media: 'file', types: ['application/json'] }, errors: [], example: {},
})
