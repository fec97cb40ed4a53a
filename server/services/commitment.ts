import { createHmac } from 'node:crypto'
import { config } from '../config'

export interface Committed {
  /** The same bytes, to be read once. */
  readonly bytes: AsyncIterable<Uint8Array>
  /** HMAC-SHA-256 of the bytes, hex, once they have been read: tells nothing of them, and can be opened later. */
  readonly commitment: () => string
}

/** A keyed commitment to bytes that contain allocation, made while they pass. */
export function committed(source: AsyncIterable<Uint8Array>): Committed {
  const mac = createHmac('sha256', config().secrets.commitmentKey)
  async function* pass(): AsyncGenerator<Uint8Array> {
    for await (const chunk of source) {
      mac.update(chunk)
      yield chunk
    }
  }
  return { bytes: pass(), commitment: () => mac.digest('hex') }
}
