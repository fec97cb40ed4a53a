// @ts-check
import { cpSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { requireBuild } from './build.mjs'
import { contentHash } from './content-hash.mjs'
import { requireDependencies } from './dependencies.mjs'
import { lockFaults } from './lock-engines.mjs'
import { CHROMIUM, requirePackages } from './packages.mjs'
import { freePort } from './ports.mjs'
import { startCluster } from './postgres.mjs'
import { run, runQuietly } from './processes.mjs'
import { main, Refusal, say } from './say.mjs'
import { makeDataDir, makeSecrets } from './secrets.mjs'
import { startServers } from './servers.mjs'
import { closingLine, total, vitestCount } from './vitest-count.mjs'

/** @typedef {import('./vitest-count.mjs').Count} Count */
/** @typedef {{ name: string, seconds: number, count: Count }} Done */

const root = fileURLToPath(new URL('..', import.meta.url)).replace(/\/$/, '')
const dataDir = resolve(process.env.STIPULE_DATA_DIR || join(root, '.data'))
const logDir = join(dataDir, 'logs/test')
const long = process.argv.includes('--long')
const only = process.argv.includes('--only') ? (process.argv[process.argv.indexOf('--only') + 1] ?? '').split(',') : null

const OK = { passed: 1, failed: 0, skipped: 0 }
const FAILED = { passed: 0, failed: 1, skipped: 0 }

/** @type {Done[]} */
const done = []

/**
 * Runs one stage when it is asked for, and notes what came of it. A stage that throws counts as one failure.
 *
 * @param {string} name
 * @param {AbortSignal} signal
 * @param {() => Promise<Count>} work
 */
async function stage(name, signal, work) {
  if (only && !only.includes(name)) return
  say(`\n— ${name}`)
  const started = Date.now()
  let count
  try {
    count = await work()
  }
  catch (error) {
    signal.throwIfAborted()
    say(error instanceof Error ? error.message : String(error))
    count = FAILED
  }
  done.push({ name, seconds: (Date.now() - started) / 1000, count })
}

/**
 * @param {string} command
 * @param {readonly string[]} args
 * @param {AbortSignal} signal
 * @returns {Promise<Count>}
 */
async function check(command, args, signal) {
  const { code } = await run({ command, args, cwd: root, env: { ...process.env, NUXT_TELEMETRY_DISABLED: '1' }, output: 'stderr', signal })
  return code === 0 ? OK : FAILED
}

/**
 * @param {string} project
 * @param {AbortSignal} signal
 * @param {NodeJS.ProcessEnv} [more]
 */
async function vitest(project, signal, more = {}) {
  const file = join(logDir, `${project}.json`)
  rmSync(file, { force: true })
  const { code } = await run({
    command: 'npx', args: ['vitest', 'run', '--project', project, '--reporter=default', '--reporter=json', `--outputFile.json=${file}`],
    cwd: root, env: { ...process.env, ...more, CHROMIUM_PATH: CHROMIUM, ...(long ? { STIPULE_LONG: '1' } : {}) }, output: 'stderr', signal,
  })
  return vitestCount(file, code)
}

/** Generating must change nothing: schema and migrations say the same. @param {AbortSignal} signal */
async function migrationDrift(signal) {
  const before = contentHash(root, { contents: ['drizzle'] })
  const copy = mkdtempSync(join(tmpdir(), 'stipule-drizzle-'))
  cpSync(join(root, 'drizzle'), copy, { recursive: true })
  try {
    await runQuietly({ what: 'drizzle-kit', command: 'npx', args: ['drizzle-kit', 'generate', '--name', 'drift'], cwd: root, log: join(logDir, 'drift.log'), signal })
    if (contentHash(root, { contents: ['drizzle'] }) === before) return OK
    throw new Refusal('The schema says something that no migration does: npm run db:generate -- --name what-changed')
  }
  finally {
    rmSync(join(root, 'drizzle'), { recursive: true })
    cpSync(copy, join(root, 'drizzle'), { recursive: true })
    rmSync(copy, { recursive: true })
  }
}

/** @returns {Promise<Count>} */
async function engines() {
  const faults = lockFaults(JSON.parse(readFileSync(join(root, 'package-lock.json'), 'utf8')), [20, 19, 0])
  if (faults.length > 0) throw new Refusal(faults.join('\n'))
  return OK
}

/**
 * What needs the built programs: a cluster of its own, one template for the service tests, one server for all.
 *
 * @param {AbortSignal} signal
 */
async function served(signal) {
  const wanted = (long ? ['long'] : ['api', 'browser']).filter(name => !only || only.includes(name))
  if (wanted.length === 0) return
  const home = join(dataDir, 'test')
  makeDataDir(home)
  makeSecrets(home)
  const cluster = await startCluster({ stateDir: home, logDir, durable: false, signal })
  try {
    await cluster.execute('drop database if exists stipule_template with (force); drop database if exists stipule with (force); create database stipule owner stipule_owner;')
    const settings = { root, dataDir: home, logDir, port: await freePort(), demo: false, signal, databaseUrl: cluster.databaseUrl, migrationUrl: cluster.migrationUrl }
    const servers = await startServers(settings)
    try {
      const template = Object.assign(new URL(cluster.migrationUrl), { pathname: '/stipule_template' }).href
      await cluster.execute('create database stipule_template owner stipule_owner;')
      await migrateTemplate(settings, template, signal)
      const env = {
        E2E_URL: servers.url, DATABASE_URL: cluster.databaseUrl, MIGRATION_DATABASE_URL: cluster.migrationUrl, TEST_ADMIN_URL: cluster.adminUrl,
        STIPULE_DATA_DIR: home, STIPULE_ORIGIN: servers.url, AUTH_ORIGIN: `${servers.url}/api/auth`, STIPULE_SMTP_URL: 'smtp://127.0.0.1:1', STIPULE_MAIL_FROM: 'stipule@localhost.example',
      }
      for (const name of wanted) await stage(name, signal, () => vitest(name, signal, env))
    }
    finally {
      await servers.stop()
    }
  }
  finally {
    await cluster.stop()
    cluster.remove()
    rmSync(home, { recursive: true, force: true })
  }
}

/**
 * @param {{ databaseUrl: string, dataDir: string }} settings
 * @param {string} template
 * @param {AbortSignal} signal
 */
async function migrateTemplate({ databaseUrl, dataDir: home }, template, signal) {
  await runQuietly({
    what: 'The migration of the template', command: process.execPath, args: [join(root, '.output/server/migrate.mjs')], log: join(logDir, 'template.log'), signal,
    env: { ...process.env, MIGRATION_DATABASE_URL: template, DATABASE_URL: Object.assign(new URL(databaseUrl), { pathname: '/stipule_template' }).href, STIPULE_DATA_DIR: home, STIPULE_ORIGIN: 'http://127.0.0.1:3000', STIPULE_DEMO: 'true' },
  })
}

/** @param {AbortSignal} signal */
async function quick(signal) {
  await stage('lock', signal, engines)
  await stage('lint', signal, () => check('npx', ['eslint', '.', '--max-warnings', '0'], signal))
  await stage('types', signal, () => check('npx', ['nuxt', 'typecheck'], signal))
  await stage('dead-code', signal, () => check('npx', ['knip'], signal))
  await stage('migrations', signal, () => migrationDrift(signal))
  for (const project of ['unit', 'reference', 'component']) await stage(project, signal, () => vitest(project, signal))
}

/** @param {AbortSignal} signal */
async function slow(signal) {
  await stage('regeneration', signal, () => check(process.execPath, ['scripts/reference/regenerate.mjs', '--check'], signal))
  await stage('unit, full counts', signal, () => vitest('unit', signal))
}

/** @param {AbortSignal} signal */
async function withBuild(signal) {
  await stage('build', signal, async () => {
    await requireBuild({ root, logDir, lockFile: join(dataDir, 'build.lock'), signal })
    return OK
  })
  if (done.some(({ name, count }) => name === 'build' && count.failed > 0)) {
    for (const name of long ? ['long'] : ['api', 'browser']) await stage(name, signal, () => Promise.reject(new Refusal('There is no build to test.')))
    return
  }
  await served(signal)
}

function report() {
  say('')
  for (const { name, seconds, count } of done) say(`${name.padEnd(22)}${`${seconds.toFixed(1)} s`.padStart(9)}   ${closingLine(count)}`)
  const sum = total(done.map(({ count }) => count))
  process.stdout.write(`${closingLine(sum)}\n`)
  return sum.failed > 0 || sum.passed === 0 ? 1 : 0
}

await main(async (signal) => {
  makeDataDir(dataDir)
  await requirePackages(['start', 'test', ...long ? /** @type {const} */ (['long']) : []], join(logDir, 'packages.log'))
  await requireDependencies({ root, logDir, signal })
  if (long) await slow(signal)
  else await quick(signal)
  await withBuild(signal)
  return report()
})
