import { relative } from 'node:path'
import { operations as declaredOperations } from '../../shared/contract/index'
import type { Operation } from '../../shared/contract/operation'

/** As much of a scanned handler of Nitro as is compared. */
export interface ScannedRoute {
  readonly route?: string
  readonly method?: string
  readonly middleware?: boolean
  readonly handler: string
}

/** Routes that no operation declares: next-auth's own, and the one that answers unknown paths. */
const EXCEPTED = new Set(['/api/auth/**', '/api/**'])

const signature = (method: string, route: string) => `${method.toUpperCase()} ${route}`
const routeOf = ({ path }: Operation) => path.replace(/\[([^\]]+)\]/g, ':$1')

/**
 * Compares the file tree of routes with the declared operations.
 *
 * @returns one line per difference; empty when both say the same.
 */
export function contractDifferences(scanned: readonly ScannedRoute[], operations: readonly Operation[], root: string): string[] {
  const routes = scanned.filter(({ route, middleware }) => route?.startsWith('/api/') && !middleware && !EXCEPTED.has(route))
  const files = new Map(routes.map(({ method = 'any', route = '', handler }) => [signature(method, route), relative(root, handler)]))
  const declared = new Map(operations.map(operation => [signature(operation.method, routeOf(operation)), operation.id]))
  return [
    ...[...files].filter(([key]) => !declared.has(key)).map(([key, file]) => `${key} (${file}) has no operation in the contract`),
    ...[...declared].filter(([key]) => !files.has(key)).map(([key, id]) => `${key} (operation ${id}) has no route`),
    ...duplicates(operations.map(({ id }) => id)).map(id => `operation id ${id} is used twice`),
  ]
}

const duplicates = (ids: readonly string[]) => [...new Set(ids.filter((id, index) => ids.indexOf(id) !== index))]

interface Building {
  readonly scannedHandlers: readonly ScannedRoute[]
  readonly options: { readonly dev: boolean, readonly rootDir: string }
  readonly logger: { warn: (message: string) => void }
}

/** Stops a build whose routes and operations differ; the development server only says so. */
export function requireContract({ scannedHandlers, options, logger }: Building): void {
  const differences = contractDifferences(scannedHandlers, declaredOperations, options.rootDir)
  if (differences.length === 0) return
  const message = `Routes and contract differ:\n  ${differences.join('\n  ')}`
  if (!options.dev) throw new Error(message)
  logger.warn(message)
}
