import { describe, expect, it } from 'vitest'
import { contractDifferences, requireContract } from '../../../../scripts/build/contract-check'
import { defineOperation } from '#shared/contract/operation'

const operation = (id: string, method: 'GET' | 'POST', path: string) => defineOperation({
  id, method, path, action: 'own.read', scope: 'installation', params: null, query: null, body: null, answer: null, errors: [], example: {},
})
const declared = [operation('a.list', 'GET', '/api/a'), operation('a.read', 'GET', '/api/a/[aId]')]
const routes = [
  { route: '/api/a', method: 'get', handler: '/root/server/api/a/index.get.ts' },
  { route: '/api/a/:aId', method: 'get', handler: '/root/server/api/a/[aId].get.ts' },
  { route: '/api/auth/**', handler: '/root/server/api/auth/[...].ts' },
  { route: '/api/**', handler: '/root/server/api/[...].ts' },
  { middleware: true, handler: '/root/server/middleware/01.request.ts' },
]

describe('contractDifferences', () => {
  it('finds none where every route has its operation', () => {
    expect(contractDifferences(routes, declared, '/root')).toEqual([])
  })

  it('names a route without operation, by its file', () => {
    const extra = { route: '/api/b', method: 'post', handler: '/root/server/api/b.post.ts' }
    expect(contractDifferences([...routes, extra], declared, '/root')).toEqual(['POST /api/b (server/api/b.post.ts) has no operation in the contract'])
  })

  it('names a route that answers any method', () => {
    const any = { route: '/api/a', handler: '/root/server/api/a.ts' }
    expect(contractDifferences([...routes, any], declared, '/root')).toEqual(['ANY /api/a (server/api/a.ts) has no operation in the contract'])
  })

  it('names an operation without route and an id used twice', () => {
    const more = [...declared, operation('a.list', 'POST', '/api/a')]
    expect(contractDifferences(routes, more, '/root')).toEqual(['POST /api/a (operation a.list) has no route', 'operation id a.list is used twice'])
  })

  it('stops a build and warns the development server', () => {
    const warnings: string[] = []
    const building = (dev: boolean) => ({
      scannedHandlers: [{ route: '/api/undeclared', method: 'get', handler: '/root/x.ts' }],
      options: { dev, rootDir: '/root' }, logger: { warn: (text: string) => warnings.push(text) },
    })
    expect(() => requireContract(building(false))).toThrow('GET /api/undeclared')
    requireContract(building(true))
    expect(warnings).toEqual([expect.stringContaining('GET /api/undeclared')])
  })
})
