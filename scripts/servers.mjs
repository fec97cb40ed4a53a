// @ts-check
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { freePort } from './ports.mjs'
import { runQuietly, startService, tailOf } from './processes.mjs'
import { Refusal } from './say.mjs'

const READY_WITHIN = 60_000
const MAIL_FROM = 'Stipule <stipule@localhost.example>'
const KEEP_WITH_PARENT = new URL('./keep-with-parent.mjs', import.meta.url).href

/** @typedef {import('./processes.mjs').Service} Service */

/**
 * @typedef {object} Installation one database with the programs that serve it.
 * @property {string} root
 * @property {string} dataDir
 * @property {string} logDir
 * @property {number} port
 * @property {number | null} smtpPort port for the local mail server; null: the environment names another one.
 * @property {boolean} demo whether the demo may be made and pages are marked.
 * @property {string} databaseUrl
 * @property {string} migrationUrl
 * @property {AbortSignal} signal
 */

/** @param {Installation} installation @param {string} name */
const program = ({ root }, name) => join(root, '.output/server', name)

/** @param {{ port: number }} installation */
export const urlOf = ({ port }) => `http://127.0.0.1:${port}`

/**
 * What every program of an installation is told.
 *
 * @param {Installation} installation
 * @returns {Record<string, string>}
 */
export function environmentOf(installation) {
  const { dataDir, databaseUrl, demo, smtpPort } = installation
  const origin = process.env.STIPULE_ORIGIN || urlOf(installation)
  return {
    DATABASE_URL: databaseUrl, STIPULE_DATA_DIR: dataDir, STIPULE_DEMO: String(demo),
    STIPULE_ORIGIN: origin, AUTH_ORIGIN: `${origin}/api/auth`,
    STIPULE_MAIL_FROM: process.env.STIPULE_MAIL_FROM || MAIL_FROM,
    STIPULE_SMTP_URL: smtpPort === null ? process.env.STIPULE_SMTP_URL ?? '' : `smtp://127.0.0.1:${smtpPort}`,
  }
}

/**
 * Runs a program of the build to its end; a failure is shown with the end of its log.
 *
 * @param {Installation} installation
 * @param {{ what: string, file: string, more?: Record<string, string> }} work
 * @returns {Promise<string>} what it has written.
 */
async function runProgram(installation, { what, file, more = {} }) {
  const log = join(installation.logDir, file.replace('.mjs', '.log'))
  const env = { ...process.env, NODE_ENV: 'production', ...environmentOf(installation), ...more }
  await runQuietly({ what, command: process.execPath, args: [program(installation, file)], env, log, signal: installation.signal })
  return readFileSync(log, 'utf8')
}

/**
 * Brings an installation's database to this version.
 *
 * @param {Installation} installation
 */
export const migrate = installation => runProgram(installation, {
  what: 'The migration', file: 'migrate.mjs', more: { MIGRATION_DATABASE_URL: installation.migrationUrl },
})

/**
 * Makes the demo on an empty database.
 *
 * @param {Installation} installation
 */
export const seed = installation => runProgram(installation, { what: 'Making the demo', file: 'seed.mjs' })

/**
 * Waits until the server answers that it is ready.
 *
 * @param {string} url
 * @param {readonly Service[]} services
 * @param {AbortSignal} signal
 */
async function waitUntilReady(url, services, signal) {
  /** @type {Awaited<Service['ended']> | null} */
  let dead = null
  for (const { ended } of services) void ended.then(end => dead = end)
  const deadline = Date.now() + READY_WITHIN
  while (Date.now() < deadline) {
    if (dead) throw endedEarly(dead)
    const answer = await fetch(`${url}/api/health`, { signal: AbortSignal.timeout(2000) }).catch(() => null)
    if (answer?.ok) return
    await delay(200, undefined, { signal }).catch(() => signal.throwIfAborted())
  }
  throw new Refusal(`The server did not become ready within ${READY_WITHIN / 1000} seconds. The end of its log:\n${tailOf(services.at(-1)?.log ?? '')}`)
}

/** @param {Awaited<Service['ended']>} end */
export const endedEarly = ({ name, code, log }) => new Refusal(`The ${name} has ended with exit code ${code}. The end of ${log}:\n${tailOf(log)}`)

/**
 * Starts worker and web server on a migrated database, and the local mail server where none is named; answers
 * when they serve.
 *
 * @param {Installation} installation
 * @returns {Promise<{ url: string, ended: Service['ended'], stop: () => Promise<void> }>} `ended` tells of the
 *   first one that ends.
 */
export async function startServers(installation) {
  const { logDir, port, signal, smtpPort } = installation
  const env = {
    ...process.env, NODE_ENV: 'production', ...environmentOf(installation),
    HOST: '127.0.0.1', PORT: String(port), NITRO_HOST: '127.0.0.1', NITRO_PORT: String(port), STIPULE_SMTP_PORT: String(smtpPort ?? ''),
  }
  /** @param {string} name @param {string} file */
  const start = (name, file) => startService({
    name, command: process.execPath, args: ['--import', KEEP_WITH_PARENT, program(installation, file)], env,
    log: join(logDir, file.replace('.mjs', '.log').replace('index', 'web')), channel: true,
  })
  const mail = smtpPort === null ? [] : [start('mail server', 'mail-sink.mjs')]
  const serving = [start('worker', 'worker.mjs'), start('web server', 'index.mjs')]
  /** Mails are taken until the last sender has ended. */
  const stop = async () => {
    for (const services of [serving, mail]) await Promise.all(services.map(service => service.stop()))
  }
  const services = [...mail, ...serving]
  try {
    await waitUntilReady(urlOf(installation), services, signal)
  }
  catch (error) {
    await stop()
    throw error
  }
  return { url: urlOf(installation), ended: Promise.race(services.map(({ ended }) => ended)), stop }
}

/** A port for the local mail server, unless the environment names another server. */
export const chooseSmtpPort = async () => process.env.STIPULE_SMTP_URL ? null : freePort()
