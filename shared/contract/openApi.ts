import { extendZodWithOpenApi, OpenAPIRegistry, OpenApiGeneratorV31, type ResponseConfig, type RouteConfig } from '@asteasolutions/zod-to-openapi'
import { z } from 'zod'
import { operations } from './index'
import { isMedia, type Operation, type Shape } from './operation'
import { PROBLEMS, type ProblemCode } from './problems'

extendZodWithOpenApi(z) // the generator describes path and query parameters through the method that this adds

type Content = NonNullable<ResponseConfig['content']>
type Answers = Record<number, ResponseConfig>

const problemSchema = z.strictObject({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  code: z.string(),
  requestId: z.string(),
  errors: z.array(z.object({
    pointer: z.string().optional(), row: z.number().int().optional(), column: z.string().optional(), code: z.string(),
    params: z.record(z.unknown()).optional(),
  })),
})

/** Codes that an operation can answer by the way it is handled, whatever it does. */
function ordinaryCodes({ action, scope, params, query, body, revision, method }: Operation): readonly ProblemCode[] {
  const codes: ProblemCode[] = ['internal', 'database-unavailable']
  if (typeof action === 'string') codes.push('not-signed-in', 'not-permitted')
  if (scope === 'study') codes.push('not-found')
  if (params || query || body) codes.push('invalid-input')
  if (body && !isMedia(body)) codes.push('unreadable-request', 'too-large')
  if (method !== 'GET') codes.push('foreign-origin', 'unsupported-media-type')
  if (revision) codes.push('revision-missing', 'revision-changed')
  return codes
}

function contentOf(shape: Exclude<Shape, null>, example: unknown): Content {
  if (!isMedia(shape)) return { 'application/json': { schema: shape, ...(example === undefined ? {} : { example }) } }
  return Object.fromEntries(shape.types.map(type => [type, { schema: { type: 'string', format: 'binary' } }]))
}

function answersOf(operation: Operation): Answers {
  const { answer, errors, example } = operation
  const answers: Answers = answer === null
    ? { 204: { description: 'Done' } }
    : { 200: { description: 'Done', content: contentOf(answer, example.answer) } }
  for (const code of [...new Set([...ordinaryCodes(operation), ...errors])].sort()) {
    const status = PROBLEMS[code]
    const known = answers[status]?.description
    answers[status] = { description: known ? `${known}, ${code}` : code, content: { 'application/problem+json': { schema: problemSchema } } }
  }
  return answers
}

const asObject = (schema: z.ZodTypeAny | null) => schema instanceof z.ZodObject ? schema : undefined

function routeOf(operation: Operation): RouteConfig {
  const { id, method, path, body, params, query, revision, action, example } = operation
  return {
    operationId: id,
    method: method.toLowerCase() as RouteConfig['method'],
    path: path.replace(/\[([^\]]+)\]/g, '{$1}'),
    security: typeof action === 'string' ? [{ session: [] }] : [],
    request: {
      params: asObject(params),
      query: asObject(query),
      ...(revision ? { headers: z.object({ 'If-Match': z.string() }) } : {}),
      ...(body ? { body: { required: true, content: contentOf(body, example.body) } } : {}),
    },
    responses: answersOf(operation),
  }
}

/** The published description (OpenAPI 3.1) of every operation. */
export function openApiDocument(): object {
  const registry = new OpenAPIRegistry()
  registry.registerComponent('securitySchemes', 'session', { type: 'apiKey', in: 'cookie', name: 'next-auth.session-token' })
  for (const operation of operations) registry.registerPath(routeOf(operation))
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({ openapi: '3.1.0', info: { title: 'Stipule', version: '1' } })
}
