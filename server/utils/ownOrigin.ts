import { getRequestHeader, type H3Event } from 'h3'
import { isMedia, type Operation } from '#shared/contract/operation'
import { config } from '../config'
import { DomainError } from '../domainError'

export const changesState = (method: string) => !['GET', 'HEAD', 'OPTIONS'].includes(method)

/** Browsers name the origin of every request that changes something; another one's is a forged request. */
export function requireOwnOrigin(event: H3Event): void {
  if (getRequestHeader(event, 'origin') !== config().origin) throw new DomainError('foreign-origin')
}

/** Types that a form of another site can send without asking are refused with all others. */
export function requireContentType(event: H3Event, { body }: Operation): void {
  const type = getRequestHeader(event, 'content-type')?.split(';')[0]?.trim().toLowerCase()
  if (body === null && type === undefined) return
  const allowed = body !== null && isMedia(body) ? body.types : ['application/json']
  if (type === undefined || !allowed.includes(type)) throw new DomainError('unsupported-media-type')
}
