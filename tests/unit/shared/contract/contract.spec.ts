import { describe, expect, it } from 'vitest'
import { operations } from '#shared/contract/index'
import { isMedia, type Shape } from '#shared/contract/operation'
import { openApiDocument } from '#shared/contract/openApi'

const parameterNames = (path: string) => [...path.matchAll(/\[([^\]]+)\]/g)].map(([, name]) => name)

describe.each(operations.map(operation => [operation.id, operation] as const))('operation %s', (_, operation) => {
  it('has an example of every parameter of its path, and examples that its schemas accept', () => {
    const { params, query, body, example } = operation
    expect(Object.keys(example.params ?? {}).sort()).toEqual(parameterNames(operation.path).sort())
    for (const [schema, value] of [[params, example.params], [query, example.query]] as const) {
      if (schema) expect(schema.safeParse(value ?? {}).error?.issues).toBeUndefined()
    }
    if (body && !isMedia(body)) expect(body.safeParse(example.body).error?.issues).toBeUndefined()
  })

  it('refuses keys that it does not know', () => {
    const strict = (schema: Shape) => schema === null || isMedia(schema)
      || schema.safeParse({ 'nobody-knows-this': 1 }).error?.issues.some(issue => issue.code === 'unrecognized_keys' || issue.path.length === 0)
    expect([operation.params, operation.query, operation.body].every(strict)).toBe(true)
  })

  it('resolves membership exactly when it lies below a study', () => {
    expect(operation.scope).toBe(operation.path.startsWith('/api/studies/[studyId]') ? 'study' : 'installation')
  })

  it('gives a reason when it is public', () => {
    if (typeof operation.action !== 'string') expect(operation.action.public.length).toBeGreaterThan(20)
  })
})

describe('the contract', () => {
  it('names each operation and each method of a path once', () => {
    const keys = operations.flatMap(({ id, method, path }) => [id, `${method} ${path}`])
    expect(new Set(keys).size).toBe(keys.length)
  })

  it('is published whole', () => {
    const { paths } = openApiDocument() as { paths: Record<string, Record<string, { operationId: string, responses: object }>> }
    const published = Object.values(paths).flatMap(methods => Object.values(methods).map(({ operationId }) => operationId))
    expect(published.sort()).toEqual(operations.map(({ id }) => id).sort())
    expect(paths['/api/studies/{studyId}/members']?.post?.responses).toHaveProperty('409')
  })
})
