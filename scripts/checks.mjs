// @ts-check
import { cpSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { contentHash } from './content-hash.mjs'
import { countVitest, ONE_FAILED, ONE_PASSED } from './counts.mjs'
import { tool } from './dependencies.mjs'
import { lockFaults } from './lock-engines.mjs'
import { CHROMIUM } from './packages.mjs'
import { readJson } from './private-file.mjs'
import { run, runQuietly } from './processes.mjs'
import { Refusal } from './say.mjs'

/** @typedef {import('./counts.mjs').Count} Count */
/** @typedef {{ root: string, logDir: string, signal: AbortSignal }} Setting */

/** Minutes after which a check hangs rather than works. */
const CHECK_MINUTES = 10

/**
 * Runs a program that says by its exit code whether all is well.
 *
 * @param {Setting} setting
 * @param {string} command
 * @param {readonly string[]} args
 * @param {number} [minutes]
 * @returns {Promise<Count>}
 */
export async function check({ root, signal }, command, args, minutes = CHECK_MINUTES) {
  const { code } = await run({ command, args, cwd: root, env: { ...process.env, NUXT_TELEMETRY_DISABLED: '1' }, output: 'stderr', minutes, signal })
  return code === 0 ? ONE_PASSED : ONE_FAILED
}

/** Every package of the lock must run on the least Node.js that we promise. @param {Setting} setting */
export async function lockCheck({ root }) {
  const faults = lockFaults(JSON.parse(readFileSync(join(root, 'package-lock.json'), 'utf8')), [20, 19, 0])
  if (faults.length > 0) throw new Refusal(faults.join('\n'))
  return ONE_PASSED
}

/** Application, scripts and tests, each by its own settings. @param {Setting} setting */
export async function typeCheck(setting) {
  const { root } = setting
  const parts = [
    await check(setting, tool(root, 'nuxt'), ['typecheck']),
    await check(setting, tool(root, 'tsc'), ['-p', 'scripts']),
    await check(setting, tool(root, 'vue-tsc'), ['-p', 'tests']),
    await check(setting, tool(root, 'vue-tsc'), ['-p', 'tests/component']),
  ]
  return parts.includes(ONE_FAILED) ? ONE_FAILED : ONE_PASSED
}

/**
 * Schema and migrations must say the same: generating a migration, into a copy, adds nothing.
 *
 * @param {Setting} setting
 */
export async function migrationCheck({ root, logDir, signal }) {
  const copy = '.data/drift' // drizzle-kit reads its folder's name as relative to the working directory
  const migrations = () => contentHash(join(root, copy), { contents: ['drizzle'] })
  rmSync(join(root, copy), { recursive: true, force: true })
  mkdirSync(join(root, copy), { recursive: true })
  cpSync(join(root, 'drizzle'), join(root, copy, 'drizzle'), { recursive: true })
  writeFileSync(join(root, copy, 'drizzle.config.ts'), `import config from '../../drizzle.config'\nexport default { ...config, out: '${copy}/drizzle' }\n`)
  const before = migrations()
  await runQuietly({
    what: 'drizzle-kit', command: tool(root, 'drizzle-kit'), args: ['generate', '--config', `${copy}/drizzle.config.ts`, '--name', 'drift'],
    cwd: root, log: join(logDir, 'drift.log'), minutes: CHECK_MINUTES, signal,
  })
  if (migrations() !== before) throw new Refusal(`The schema says something that no migration does; ${copy} shows it. npm run db:generate -- --name what-changed`)
  rmSync(join(root, copy), { recursive: true })
  return ONE_PASSED
}

/**
 * Runs one of vitest's projects.
 *
 * @param {Setting} setting
 * @param {string} project
 * @param {{ minutes?: number, env?: NodeJS.ProcessEnv }} [options]
 */
export async function vitest({ root, logDir, signal }, project, { minutes = 20, env = {} } = {}) {
  const file = join(logDir, `${project}.json`)
  rmSync(file, { force: true })
  const { code } = await run({
    command: tool(root, 'vitest'), args: ['run', '--project', project, '--reporter=default', '--reporter=json', `--outputFile.json=${file}`],
    cwd: root, env: { ...process.env, ...env, CHROMIUM_PATH: CHROMIUM }, output: 'stderr', minutes, signal,
  })
  return countVitest(readJson(file), code)
}
