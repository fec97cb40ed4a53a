// @ts-check
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { freePort } from './ports.mjs'
import { runQuietly, startService, tailOf } from './processes.mjs'
import { Refusal } from './say.mjs'

const READY_WITHIN = 60_000
const MAIL_FROM = 'Stipule <stipule@localhost.example>'

/**
 * @typedef {object} Settings
 * @property {string} root
 * @property {string} dataDir
 * @property {string} logDir
 * @property {number} port
 * @property {string} databaseUrl
 * @property {string} migrationUrl
 * @property {boolean} demo whether the demo may be made and pages are marked.
 * @property {string} [smtpUrl] a mail server of one's own; otherwise the local one is started.
 * @property {AbortSignal} signal
 */

/** @param {Settings} settings @param {string} name */
const program = ({ root }, name) => join(root, '.output/server', name)

/**
 * The environment of every program of one installation.
 *
 * @param {Settings} settings
 * @param {string} smtpUrl
 */
const environment = ({ dataDir, port, databaseUrl, demo }, smtpUrl) => {
  const origin = `http://127.0.0.1:${port}`
  return {
    STIPULE_ORIGIN: origin, AUTH_ORIGIN: `${origin}/api/auth`, STIPULE_MAIL_FROM: MAIL_FROM,
    ...process.env,
    NODE_ENV: 'production', DATABASE_URL: databaseUrl, STIPULE_DATA_DIR: dataDir, STIPULE_SMTP_URL: smtpUrl, STIPULE_DEMO: String(demo),
    HOST: '127.0.0.1', PORT: String(port), NITRO_HOST: '127.0.0.1', NITRO_PORT: String(port),
  }
}

/**
 * Waits until the server answers that it is ready.
 *
 * @param {string} url
 * @param {readonly import('./processes.mjs').Service[]} services
 * @param {AbortSignal} signal
 */
async function untilReady(url, services, signal) {
  /** @type {{ name: string, code: number, log: string } | null} */
  let dead = null
  for (const { ended } of services) void ended.then(end => dead = end)
  const deadline = Date.now() + READY_WITHIN
  while (Date.now() < deadline) {
    signal.throwIfAborted()
    if (dead) throw endedEarly(dead)
    const answer = await fetch(`${url}/api/health`, { signal: AbortSignal.timeout(2000) }).catch(() => null)
    if (answer?.ok) return
    await pause(200)
  }
  throw new Refusal(`The server did not become ready within ${READY_WITHIN / 1000} seconds.`)
}

/** @param {{ name: string, code: number, log: string }} end */
export const endedEarly = ({ name, code, log }) => new Refusal(`The ${name} has ended with exit code ${code}. The end of ${log}:\n${tailOf(log)}`)

/**
 * Migrates, makes the demo where it is wanted, and starts web server, worker and, without a mail server of one's
 * own, the local one.
 *
 * @param {Settings} settings
 * @returns {Promise<{ url: string, migrated: string, services: import('./processes.mjs').Service[], stop: () => Promise<void> }>}
 */
export async function startServers(settings) {
  const { logDir, migrationUrl, port, signal } = settings
  const smtpPort = settings.smtpUrl ? null : await freePort()
  const env = environment(settings, settings.smtpUrl ?? `smtp://127.0.0.1:${smtpPort}`)
  const node = process.execPath
  const migration = join(logDir, 'migrate.log')
  await runQuietly({ what: 'The migration', command: node, args: [program(settings, 'migrate.mjs')], env: { ...env, MIGRATION_DATABASE_URL: migrationUrl }, log: migration, signal })
  if (settings.demo) await runQuietly({ what: 'The demo', command: node, args: [program(settings, 'seed.mjs')], env, log: join(logDir, 'seed.log'), signal })
  const preload = ['--import', new URL('./keep-with-parent.mjs', import.meta.url).href]
  /** @param {string} name @param {string} file @param {NodeJS.ProcessEnv} [more] */
  const start = (name, file, more = {}) => startService({
    name, command: node, args: [...preload, program(settings, file)], env: { ...env, ...more }, log: join(logDir, `${name.replaceAll(' ', '-')}.log`), channel: true,
  })
  const services = [
    ...smtpPort === null ? [] : [start('mail server', 'mail-sink.mjs', { STIPULE_SMTP_PORT: String(smtpPort) })],
    start('worker', 'worker.mjs'),
    start('web server', 'index.mjs'),
  ]
  const stop = async () => {
    await Promise.all(services.map(service => service.stop()))
  }
  const url = `http://127.0.0.1:${port}`
  try {
    await untilReady(url, services, signal)
  }
  catch (error) {
    await stop()
    throw error
  }
  return { url, migrated: migration, services, stop }
}
