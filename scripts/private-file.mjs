// @ts-check
import { existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs'
import { Refusal } from './say.mjs'

/**
 * Writes JSON that nobody else may read; whole or not at all.
 *
 * @param {string} file
 * @param {unknown} content
 */
export function writePrivateJson(file, content) {
  const fresh = `${file}.${process.pid}`
  writeFileSync(fresh, `${JSON.stringify(content, null, 2)}\n`, { mode: 0o600 })
  renameSync(fresh, file)
}

/**
 * Reads JSON, or answers null where there is no such file.
 *
 * @param {string} file
 * @returns {any}
 */
export function readJson(file) {
  if (!existsSync(file)) return null
  try {
    return JSON.parse(readFileSync(file, 'utf8'))
  }
  catch (error) {
    throw new Refusal(`${file} cannot be read: ${/** @type {Error} */ (error).message}`)
  }
}
