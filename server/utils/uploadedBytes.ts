import type { H3Event } from 'h3'
import { config } from '../config'
import { DomainError } from '../domainError'

const tooLarge = (maximum: number) => new DomainError('too-large', [{ code: 'file-too-large', params: { maximum, megabytes: Math.floor(maximum / 1024 / 1024) } }])

/**
 * The body of an upload as it comes in, at most as many bytes as the configuration allows. When reading stops
 * early the rest is let through unread, so that the client still gets the answer.
 *
 * @throws {DomainError} `too-large` with the limit, by the declared length at once, else when it is passed.
 */
export async function* uploadedBytes(event: H3Event): AsyncGenerator<Uint8Array> {
  const { uploadLimit } = config()
  const { req } = event.node
  try {
    if (Number(req.headers['content-length'] ?? 0) > uploadLimit) throw tooLarge(uploadLimit)
    let size = 0
    for await (const chunk of req.iterator({ destroyOnReturn: false }) as AsyncIterable<Buffer>) {
      size += chunk.length
      if (size > uploadLimit) throw tooLarge(uploadLimit)
      yield chunk
    }
  }
  finally {
    req.resume()
  }
}
