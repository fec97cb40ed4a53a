// @ts-check
import { join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { requireBuild } from './build.mjs'
import { requireDependencies, requireNode } from './dependencies.mjs'
import { requirePackages } from './packages.mjs'
import { portFault } from './ports.mjs'
import { startCluster } from './postgres.mjs'
import { readJson } from './private-file.mjs'
import { main, Refusal, say } from './say.mjs'
import { makeDataDir, makeSecrets } from './secrets.mjs'
import { chooseSmtpPort, endedEarly, migrate, seed, startServers } from './servers.mjs'

const root = fileURLToPath(new URL('..', import.meta.url))
const dataDir = resolve(root, process.env.STIPULE_DATA_DIR || '.data')
const logDir = join(dataDir, 'logs')

/** @typedef {Pick<import('./postgres.mjs').Cluster, 'databaseUrl' | 'migrationUrl' | 'ended' | 'stop'>} Database */

/** The port to serve on; a taken one is said, not hopped over. */
async function chosenPort() {
  const port = Number(process.env.PORT || 3000)
  if (!Number.isInteger(port) || port < 1 || port > 65535) throw new Refusal(`PORT is ${process.env.PORT}, which is no port.`)
  const fault = await portFault(port)
  if (fault === 'EADDRINUSE') throw new Refusal(`Port ${port} is taken by another program. Stop it, or choose another port: PORT=${port + 100} npm start`)
  if (fault) throw new Refusal(`Port ${port} cannot be served on (${fault}).`)
  return port
}

/**
 * The addresses of a database server of one's own, or null for the private cluster.
 *
 * @returns {Pick<Database, 'databaseUrl' | 'migrationUrl'> | null}
 */
function givenDatabase() {
  const { DATABASE_URL: databaseUrl, MIGRATION_DATABASE_URL: migrationUrl } = process.env
  if (databaseUrl && migrationUrl) return { databaseUrl, migrationUrl }
  if (!databaseUrl && !migrationUrl) return null
  const [given, lacking] = databaseUrl ? ['DATABASE_URL', 'MIGRATION_DATABASE_URL'] : ['MIGRATION_DATABASE_URL', 'DATABASE_URL']
  throw new Refusal(`${given} is given, ${lacking} is not. A server of your own needs both: the owner's address for migrations, and that of a role which owns nothing for serving. Its administrator can run:

    create role stipule_owner login password '…';
    create role stipule_app login password '…';
    create database stipule owner stipule_owner;`)
}

/**
 * Starts the private cluster where no other server is given.
 *
 * @param {ReturnType<typeof givenDatabase>} given
 * @param {AbortSignal} signal
 * @returns {Promise<Database>}
 */
async function openDatabase(given, signal) {
  if (given) return { ...given, ended: new Promise(() => {}), stop: async () => {} }
  say('Starting the private PostgreSQL.')
  return startCluster({ stateDir: dataDir, logDir, signal })
}

function sayAccounts() {
  const accounts = readJson(join(dataDir, 'demo-accounts.json'))
  if (accounts === null) return
  say(`\nDemo accounts; the password of each is ${accounts[0].password}`)
  for (const { email, name, roles } of accounts) say(`    ${email.padEnd(28)}${name.padEnd(20)}${roles.join(', ')}`)
}

/**
 * Prints the link for the first administrator, which the migration offers on an empty database of one's own.
 *
 * @param {string} migration what the migration has written.
 */
function sayFirstLink(migration) {
  const link = /^https?:\/\/\S+\/invitation\/\S+$/m.exec(migration)
  if (link) say(`\nNo administrator yet. This link makes the first one, once, within an hour:\n    ${link[0]}`)
}

/**
 * Waits until the person wants an end, or something that should go on has ended.
 *
 * @param {AbortSignal} signal
 * @param {readonly import('./processes.mjs').Service['ended'][]} endings
 * @returns {Promise<number>} the exit code.
 */
async function serveUntilEnd(signal, endings) {
  const wanted = signal.aborted ? null : new Promise(done => signal.addEventListener('abort', () => done(null)))
  const end = await Promise.race([wanted, ...endings])
  if (signal.aborted) {
    say('\nStopping.')
    return 0
  }
  say(endedEarly(end).message)
  return end.code || 1
}

/**
 * @param {Database} database
 * @param {{ port: number, demo: boolean, signal: AbortSignal }} options
 */
async function serve(database, { port, demo, signal }) {
  const { databaseUrl, migrationUrl } = database
  const installation = { root, dataDir, logDir, port, smtpPort: await chooseSmtpPort(), demo, databaseUrl, migrationUrl, signal }
  say('Bringing the database to this version.')
  const migration = await migrate(installation)
  if (demo) {
    say('Making the demo, where the database is empty.')
    await seed(installation)
  }
  say('Starting web server and worker.')
  const servers = await startServers(installation)
  try {
    say(`\nStipule is ready: ${servers.url}`)
    if (demo) sayAccounts()
    else sayFirstLink(migration)
    if (installation.smtpPort !== null && !demo) say('\nMail stays in this installation, where each person can read their own; STIPULE_SMTP_URL names a server that delivers it.')
    say('\nCtrl-C stops everything that was started.')
    return await serveUntilEnd(signal, [servers.ended, database.ended])
  }
  finally {
    await servers.stop()
  }
}

await main(async (signal) => {
  requireNode()
  const port = await chosenPort()
  const given = givenDatabase()
  makeDataDir(dataDir)
  if (!given) await requirePackages(['start'], join(logDir, 'packages.log'))
  await requireDependencies({ root, signal })
  const database = await openDatabase(given, signal)
  try {
    if (makeSecrets(dataDir)) say(`Made the secrets of this installation: ${join(dataDir, 'secrets.json')}. Keep them with the data.`)
    await requireBuild({ root, signal })
    return await serve(database, { port, demo: given ? process.env.STIPULE_DEMO === 'true' : true, signal })
  }
  finally {
    await database.stop()
    say('Everything that was started has stopped.')
  }
})
