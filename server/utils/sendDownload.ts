import { Readable } from 'node:stream'
import { sendStream, setResponseHeaders, type H3Event } from 'h3'

interface Download { readonly fileName: string, readonly size: number, readonly bytes: AsyncIterable<Uint8Array> }

/** Percent-encoding of a name as a header parameter takes it (RFC 8187). */
const encoded = (name: string) => encodeURIComponent(name).replace(/['()*]/g, sign => `%${sign.charCodeAt(0).toString(16).toUpperCase()}`)

/** Sends a file to be saved, never shown: its content comes from outside (RFC 6266 for the name). */
export function sendDownload(event: H3Event, { fileName, size, bytes }: Download) {
  const plain = fileName.replace(/[^\w.-]/g, '_')
  setResponseHeaders(event, {
    'content-type': 'application/octet-stream',
    'content-length': size,
    'content-disposition': `attachment; filename="${plain}"; filename*=UTF-8''${encoded(fileName)}`,
    'x-content-type-options': 'nosniff',
    'cache-control': 'no-store',
  })
  return sendStream(event, Readable.from(bytes))
}
