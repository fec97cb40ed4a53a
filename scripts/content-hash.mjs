// @ts-check
import { createHash } from 'node:crypto'
import { readdirSync, readFileSync, statSync } from 'node:fs'
import { join } from 'node:path'

/**
 * Every file below a path, itself included, in a stable order; nothing where it does not exist.
 *
 * @param {string} root
 * @param {string} path relative to the root.
 * @returns {string[]} relative to the root.
 */
function filesBelow(root, path) {
  const stat = statSync(join(root, path), { throwIfNoEntry: false })
  if (!stat) return []
  if (!stat.isDirectory()) return [path]
  return readdirSync(join(root, path)).sort().flatMap(name => filesBelow(root, `${path}/${name}`))
}

/**
 * SHA-256 over the names of files, and over the bytes of some.
 *
 * @param {string} root
 * @param {{ contents: readonly string[], names?: readonly string[] }} of files and folders relative to the root.
 * @returns {string} hexadecimal.
 */
export function contentHash(root, { contents, names = [] }) {
  const hash = createHash('sha256')
  for (const file of contents.flatMap(path => filesBelow(root, path))) {
    const bytes = readFileSync(join(root, file))
    hash.update(`${file}\0${bytes.length}\0`).update(bytes)
  }
  for (const file of names.flatMap(path => filesBelow(root, path))) hash.update(`${file}\0`)
  return hash.digest('hex')
}
