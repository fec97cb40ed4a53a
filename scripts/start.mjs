// @ts-check
import { readFileSync } from 'node:fs'
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
import { endedEarly, startServers } from './servers.mjs'

const root = fileURLToPath(new URL('..', import.meta.url)).replace(/\/$/, '')
const dataDir = resolve(process.env.STIPULE_DATA_DIR || join(root, '.data'))
const logDir = join(dataDir, 'logs')

/** The port to serve on; a taken one is said, not hopped over. */
async function chosenPort() {
  const port = Number(process.env.PORT || 3000)
  if (!Number.isInteger(port) || port < 1 || port > 65535) throw new Refusal(`PORT is ${process.env.PORT}, which is no port.`)
  const fault = await portFault(port)
  if (fault === 'EADDRINUSE') throw new Refusal(`Port ${port} is taken by another program. Stop it, or choose another port: PORT=3100 npm start`)
  if (fault) throw new Refusal(`Port ${port} cannot be served on (${fault}).`)
  return port
}

/**
 * A database of one's own, or the private cluster.
 *
 * @param {AbortSignal} signal
 */
async function chosenDatabase(signal) {
  const { DATABASE_URL: databaseUrl, MIGRATION_DATABASE_URL: migrationUrl } = process.env
  if (databaseUrl && migrationUrl) return { databaseUrl, migrationUrl, own: true, ended: null, stop: async () => {} }
  if (databaseUrl || migrationUrl) {
    const [given, lacking] = databaseUrl ? ['DATABASE_URL', 'MIGRATION_DATABASE_URL'] : ['MIGRATION_DATABASE_URL', 'DATABASE_URL']
    throw new Refusal(`${given} is given, ${lacking} is not. A server of your own needs both: the owner's address for migrations, and that of a role which owns nothing for serving. Its administrator can run:\n\n    create role stipule_owner login password '…';\n    create role stipule_app login password '…';\n    create database stipule owner stipule_owner;`)
  }
  await requirePackages(['start'], join(logDir, 'packages.log'))
  say('Starting the private PostgreSQL.')
  const cluster = await startCluster({ stateDir: dataDir, logDir, signal })
  return { databaseUrl: cluster.databaseUrl, migrationUrl: cluster.migrationUrl, own: false, ended: cluster.ended, stop: cluster.stop }
}

function sayAccounts() {
  const accounts = readJson(join(dataDir, 'demo-accounts.json'))
  if (accounts === null) return
  say(`\nDemo accounts; the password of each is ${accounts[0].password}`)
  for (const { email, name, roles } of accounts) say(`    ${email.padEnd(28)}${name.padEnd(20)}${roles.join(', ')}`)
}

/** Prints the link for the first administrator, which the migration has offered on an empty database of one's own.
 * @param {string} log */
function sayFirstLink(log) {
  const link = /^https?:\/\/\S+\/invitation\/\S+$/m.exec(readFileSync(log, 'utf8'))
  if (link) say(`\nNo administrator yet. This link makes the first one, once, within an hour:\n    ${link[0]}`)
}

await main(async (signal) => {
  requireNode()
  const port = await chosenPort()
  makeDataDir(dataDir)
  makeSecrets(dataDir)
  await requireDependencies({ root, logDir, signal })
  const database = await chosenDatabase(signal)
  try {
    await requireBuild({ root, logDir, lockFile: join(dataDir, 'build.lock'), signal })
    const demo = database.own ? process.env.STIPULE_DEMO === 'true' : true
    say('Starting web server and worker.')
    const servers = await startServers({ root, dataDir, logDir, port, demo, signal, databaseUrl: database.databaseUrl, migrationUrl: database.migrationUrl, smtpUrl: process.env.STIPULE_SMTP_URL })
    try {
      say(`\nStipule is ready: ${servers.url}`)
      if (demo) sayAccounts()
      else sayFirstLink(servers.migrated)
      say('\nCtrl-C stops everything that was started.')
      const stopped = new Promise((_, reject) => signal.addEventListener('abort', () => reject(signal.reason)))
      const dead = await Promise.race([stopped, ...servers.services.map(({ ended }) => ended), ...database.ended ? [database.ended] : []])
      say(endedEarly(/** @type {{ name: string, code: number, log: string }} */ (dead)).message)
      return /** @type {{ code: number }} */ (dead).code || 1
    }
    finally {
      await servers.stop()
    }
  }
  finally {
    await database.stop()
  }
})
