// @ts-check
import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { contentHash } from './content-hash.mjs'
import { runQuietly } from './processes.mjs'
import { Refusal, say } from './say.mjs'

const LEAST_NODE = [20, 19]
const INSTALLED = 'node_modules/.stipule-installed'
const PREPARED = '.nuxt/.stipule-prepared'

/** Refuses a Node.js that the pinned packages do not run on. */
export function requireNode() {
  const [major = 0, minor = 0] = process.versions.node.split('.').map(Number)
  const [leastMajor = 0, leastMinor = 0] = LEAST_NODE
  if (major > leastMajor || (major === leastMajor && minor >= leastMinor)) return
  throw new Refusal(`Stipule needs Node.js ${LEAST_NODE.join('.')} or newer; this is ${process.versions.node}.`)
}

/** @param {string} file @param {string} hash */
const holds = (file, hash) => existsSync(file) && readFileSync(file, 'utf8') === hash

/**
 * Installs the pinned packages when they are not those of the lock file, and lets Nuxt write its types.
 *
 * @param {{ root: string, logDir: string, signal: AbortSignal }} place
 */
export async function requireDependencies({ root, logDir, signal }) {
  requireNode()
  const env = { ...process.env, NUXT_TELEMETRY_DISABLED: '1' }
  const lock = contentHash(root, { contents: ['package-lock.json', '.npmrc'] })
  if (!holds(join(root, INSTALLED), lock)) {
    say('Installing the packages of the lock file.')
    await runQuietly({ what: 'npm ci', command: 'npm', args: ['ci', '--ignore-scripts'], cwd: root, env, log: join(logDir, 'npm.log'), signal })
    writeFileSync(join(root, INSTALLED), lock)
  }
  const shape = contentHash(root, { contents: ['package-lock.json', 'nuxt.config.ts', 'scripts/build'], names: ['app', 'server', 'shared'] })
  if (!holds(join(root, PREPARED), shape)) {
    await runQuietly({ what: 'nuxt prepare', command: 'npx', args: ['nuxt', 'prepare'], cwd: root, env, log: join(logDir, 'prepare.log'), signal })
    writeFileSync(join(root, PREPARED), shape)
  }
}
