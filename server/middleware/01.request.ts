import { randomUUID } from 'node:crypto'

/** Gives each request its id, which problems, record and log quote, and keeps answers of the interface out of caches. */
export default defineEventHandler((event) => {
  event.context.requestId = randomUUID()
  setResponseHeader(event, 'X-Request-Id', event.context.requestId)
  if (event.path.startsWith('/api/')) setResponseHeader(event, 'Cache-Control', 'no-store')
})
