// @ts-check
import { once } from 'node:events'
import { createServer } from 'node:net'

/**
 * Tries to listen on a loopback port.
 *
 * @param {number} port 0 asks for any free one.
 * @returns {Promise<number>} the port that was free.
 * @throws the system's error when it is not (`EADDRINUSE`, `EACCES`).
 */
async function tryPort(port) {
  const server = createServer()
  server.listen(port, '127.0.0.1')
  await once(server, 'listening')
  const address = /** @type {import('node:net').AddressInfo} */ (server.address())
  server.close()
  await once(server, 'close')
  return address.port
}

export const freePort = () => tryPort(0)

/**
 * Why a loopback port cannot be served on, or null when it can.
 *
 * @param {number} port
 * @returns {Promise<string | null>} the system's error code.
 */
export async function portFault(port) {
  try {
    await tryPort(port)
    return null
  }
  catch (error) {
    return /** @type {NodeJS.ErrnoException} */ (error).code ?? 'unknown'
  }
}
