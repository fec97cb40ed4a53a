import { getRequestIP, type H3Event } from 'h3'
import { config } from '../config'
import type { RequestFacts } from '../services/viewer'

/** Request id and network address; a forwarded address counts only when a proxy of our own writes it. */
export function requestFacts(event: H3Event): RequestFacts {
  return {
    requestId: event.context.requestId ?? '',
    origin: getRequestIP(event, { xForwardedFor: config().trustProxy }) ?? 'unknown',
  }
}
