// @ts-check
import { randomBytes } from 'node:crypto'
import { chmodSync, mkdirSync } from 'node:fs'
import { join } from 'node:path'
import { readJson, writePrivateJson } from './private-file.mjs'

/** A password that needs no escaping in an address or a statement: 192 random bits. */
export const makePassword = () => randomBytes(24).toString('base64url')

/**
 * Makes the data folder. Others may pass through it, because PostgreSQL can run under an account of its own,
 * but not list it.
 *
 * @param {string} dataDir
 */
export function makeDataDir(dataDir) {
  mkdirSync(dataDir, { recursive: true })
  chmodSync(dataDir, 0o711)
}

/**
 * Makes what the server keeps secret, where it is not there yet, and the folder of its signing key, which the
 * migration fills. Sealed allocation lists can be opened with the stored keys only, so an existing file stays
 * as it is.
 *
 * @param {string} dataDir
 * @returns {boolean} whether secrets were made.
 */
export function makeSecrets(dataDir) {
  mkdirSync(join(dataDir, 'keys'), { recursive: true, mode: 0o700 })
  const file = join(dataDir, 'secrets.json')
  if (readJson(file) !== null) return false
  writePrivateJson(file, {
    authSecret: randomBytes(32).toString('base64url'),
    allocationKey: randomBytes(32).toString('hex'),
    commitmentKey: randomBytes(32).toString('hex'),
  })
  return true
}
