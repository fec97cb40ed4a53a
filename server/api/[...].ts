import { operations } from '#shared/contract/index'
import { DomainError } from '../domainError'

const pathsOf = operations.map(({ method, path }) => ({
  method,
  pattern: new RegExp(`^${path.replaceAll('.', '\\.').replace(/\[[^\]]+\]/g, '[^/]+')}$`),
}))

/** Whatever no operation answers: another method of a known path, or nothing at all. */
export default defineEventHandler((event) => {
  const { pathname } = getRequestURL(event)
  const methods = pathsOf.filter(({ pattern }) => pattern.test(pathname)).map(({ method }) => method)
  if (methods.length === 0) throw new DomainError('not-found')
  setResponseHeader(event, 'Allow', methods.join(', '))
  throw new DomainError('method-not-allowed')
})
