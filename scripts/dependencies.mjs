// @ts-check
import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { contentHash } from './content-hash.mjs'
import { alone } from './locks.mjs'
import { readJson } from './private-file.mjs'
import { runQuietly } from './processes.mjs'
import { Refusal, say } from './say.mjs'
import { makeDataDir } from './secrets.mjs'

const LEAST_NODE = /** @type {const} */ ([20, 19])
const PREPARED = '.nuxt/.stipule-prepared'

/**
 * @typedef {{ root: string, signal: AbortSignal }} Checkout
 * @typedef {Record<string, { version?: string, optional?: boolean }>} Packages by their folder.
 */

/**
 * A program of an installed package.
 *
 * @param {string} root
 * @param {string} name
 */
export const tool = (root, name) => join(root, 'node_modules/.bin', name)

/** Refuses a Node.js that the pinned packages do not run on. */
export function requireNode() {
  const [major = 0, minor = 0] = process.versions.node.split('.').map(Number)
  const [leastMajor, leastMinor] = LEAST_NODE
  if (major > leastMajor || (major === leastMajor && minor >= leastMinor)) return
  throw new Refusal(`Stipule needs Node.js ${LEAST_NODE.join('.')} or newer; this is ${process.versions.node}.`)
}

/**
 * Does something to the checkout's installed packages or to its build while no other command does.
 *
 * @template T
 * @param {Checkout} checkout
 * @param {() => Promise<T>} work
 */
export function whilePreparing({ root, signal }, work) {
  makeDataDir(join(root, '.data'))
  return alone(join(root, '.data/preparing'), signal, work)
}

/**
 * Whether what npm says to have installed is what the lock file says. Packages for other systems may be absent.
 *
 * @param {Packages} locked
 * @param {Packages} installed
 */
export function installedAsLocked(locked, installed) {
  return Object.entries(installed).every(([folder, { version }]) => locked[folder]?.version === version)
    && Object.entries(locked).every(([folder, { optional }]) => folder === '' || optional || folder in installed)
}

/** @param {string} file @returns {Packages} */
const packagesOf = file => readJson(file)?.packages ?? {}

/**
 * Installs the pinned packages when they are not those of the lock file, and lets Nuxt write its types.
 *
 * @param {Checkout} checkout
 */
export function requireDependencies({ root, signal }) {
  return whilePreparing({ root, signal }, async () => {
    const env = { ...process.env, NUXT_TELEMETRY_DISABLED: '1' }
    const log = join(root, '.data/logs')
    if (!installedAsLocked(packagesOf(join(root, 'package-lock.json')), packagesOf(join(root, 'node_modules/.package-lock.json')))) {
      say('Installing the packages of the lock file. The first time this takes about two minutes.')
      await runQuietly({ what: 'npm ci', command: 'npm', args: ['ci', '--ignore-scripts'], cwd: root, env, log: join(log, 'npm.log'), signal })
    }
    const shape = contentHash(root, { contents: ['package-lock.json', 'nuxt.config.ts', 'scripts/build'], names: ['app', 'server', 'shared'] })
    const mark = join(root, PREPARED)
    if (existsSync(mark) && readFileSync(mark, 'utf8') === shape) return
    say('Writing the types that Nuxt derives from the sources.')
    await runQuietly({ what: 'nuxt prepare', command: tool(root, 'nuxt'), args: ['prepare'], cwd: root, env, log: join(log, 'prepare.log'), signal })
    writeFileSync(mark, shape)
  })
}
