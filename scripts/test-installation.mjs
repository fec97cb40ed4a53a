// @ts-check
import { rmSync } from 'node:fs'
import { join } from 'node:path'
import { freePort } from './ports.mjs'
import { startCluster } from './postgres.mjs'
import { makeDataDir, makeSecrets } from './secrets.mjs'
import { environmentOf, migrate, seed, startServers } from './servers.mjs'

/** The migrated database that every other one is copied from. */
const TEMPLATE = 'stipule_template'

/**
 * @typedef {object} TestInstallation
 * @property {Record<string, string>} env what tests are told.
 * @property {() => Promise<void>} startDemo makes the demo on a database of its own and serves it too; its
 *   address is then `DEMO_URL` of the environment.
 * @property {() => Promise<void>} stop ends and removes everything.
 */

/** @param {string} url @param {string} database */
const onDatabase = (url, database) => Object.assign(new URL(url), { pathname: `/${database}` }).href

/**
 * Starts a cluster of the tests' own, migrates the template, and serves a copy of it.
 *
 * @param {{ root: string, logDir: string, signal: AbortSignal }} setting
 * @returns {Promise<TestInstallation>}
 */
export async function startTestInstallation({ root, logDir, signal }) {
  const dataDir = join(root, '.data/test')
  makeDataDir(dataDir)
  makeSecrets(dataDir)
  const cluster = await startCluster({ stateDir: dataDir, logDir, durable: false, signal })
  /** @type {(() => Promise<void>)[]} */
  const started = []
  async function stop() {
    await Promise.all(started.map(stopServers => stopServers()))
    await cluster.stop()
    cluster.remove()
    rmSync(dataDir, { recursive: true, force: true })
  }

  /** @param {string} database @param {{ demo: boolean, logs?: string }} options @returns {Promise<import('./servers.mjs').Installation>} */
  const installationOn = async (database, { demo, logs = logDir }) => ({
    root, dataDir, logDir: logs, port: await freePort(), smtpPort: await freePort(), demo, signal,
    databaseUrl: onDatabase(cluster.databaseUrl, database), migrationUrl: onDatabase(cluster.migrationUrl, database),
  })

  /** @param {string} name */
  const copyTemplate = name => cluster.execute(`drop database if exists ${name} with (force);\ncreate database ${name} template ${TEMPLATE};`)

  /** @param {import('./servers.mjs').Installation} installation */
  async function serve(installation) {
    const { url, stop } = await startServers(installation)
    started.push(stop)
    return url
  }

  try {
    await cluster.execute(`drop database if exists ${TEMPLATE};\ncreate database ${TEMPLATE};`)
    await migrate(await installationOn(TEMPLATE, { demo: false }))
    await copyTemplate('stipule')
    const installation = await installationOn('stipule', { demo: false })
    /** @type {Record<string, string>} */
    const env = {
      ...environmentOf(installation), E2E_URL: await serve(installation),
      MIGRATION_DATABASE_URL: installation.migrationUrl, TEST_ADMIN_URL: cluster.adminUrl,
    }
    return {
      env, stop,
      async startDemo() {
        await copyTemplate('stipule_demo')
        const demo = await installationOn('stipule_demo', { demo: true, logs: join(logDir, 'demo') })
        await seed(demo)
        env.DEMO_URL = await serve(demo)
      },
    }
  }
  catch (error) {
    await stop()
    throw error
  }
}
