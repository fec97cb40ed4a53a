// @ts-check
import { rmSync } from 'node:fs'
import { join } from 'node:path'
import { binariesFor, choosePort, placeOf } from './cluster-place.mjs'
import { endLeftover, initialise, OWNER, plainEnvironment, psql, waitUntilReady } from './cluster-programs.mjs'
import { tryLock } from './locks.mjs'
import { writePrivateJson } from './private-file.mjs'
import { startService } from './processes.mjs'
import { Refusal } from './say.mjs'

/** The role that serves and owns nothing. */
const APP = 'stipule_app'
const DATABASE = 'stipule'

/**
 * @typedef {import('./cluster-place.mjs').Place} Place
 *
 * @typedef {object} Cluster
 * @property {string} migrationUrl the owner's address of the database `stipule`.
 * @property {string} databaseUrl the application's address of it.
 * @property {string} adminUrl the owner's address of the database `postgres`.
 * @property {(statements: string) => Promise<void>} execute as the owner, in the database `postgres`.
 * @property {import('./processes.mjs').Service['ended']} ended
 * @property {() => Promise<void>} stop
 * @property {() => void} remove its data and passwords, once it has been stopped.
 */

/**
 * Starts a private PostgreSQL on a loopback port, with the roles `stipule_owner` and `stipule_app` and an empty
 * database `stipule`; makes all of it the first time.
 *
 * @param {{ stateDir: string, logDir: string, durable?: boolean, signal: AbortSignal }} options without `durable`
 *   the data may be lost when the machine fails, and tests run faster.
 * @returns {Promise<Cluster>}
 */
export async function startCluster({ stateDir, logDir, durable = true, signal }) {
  const place = placeOf(stateDir)
  const lock = tryLock(join(place.home, 'in-use'))
  if (lock.holder !== null) throw new Refusal(`The database in ${place.home} is in use by process ${lock.holder}, started from this folder. Stop that one first.`)
  try {
    return await startLocked(place, { logDir, durable, signal, release: lock.release })
  }
  catch (error) {
    lock.release()
    throw error
  }
}

/**
 * @param {Place} place
 * @param {{ logDir: string, durable: boolean, signal: AbortSignal, release: () => void }} options
 * @returns {Promise<Cluster>}
 */
async function startLocked(place, { logDir, durable, signal, release }) {
  const { state, stateFile, data, home, account } = place
  const binaries = binariesFor(place)
  await endLeftover(data, signal)
  if (!state.complete) await initialise(place, binaries, join(logDir, 'initdb.log'), signal)
  const port = await choosePort(place)
  const service = startService({
    name: 'database server', command: join(binaries, 'postgres'), args: serverArguments(data, port, durable),
    cwd: '/', env: plainEnvironment(), account, log: join(logDir, 'postgres.log'), stopBy: 'SIGINT', patience: 60,
  })
  /** @param {string} role @param {string} database */
  const url = (role, database) => `postgres://${role}:${role === OWNER ? state.ownerPassword : state.appPassword}@127.0.0.1:${port}/${database}`
  /** @type {Cluster['execute']} */
  const execute = statements => psql(binaries, url(OWNER, 'postgres'), statements, signal)
  try {
    await waitUntilReady(service, binaries, port, signal)
    if (!state.complete) {
      await execute(`create role ${APP} login password '${state.appPassword}';\ncreate database ${DATABASE};`)
      state.complete = true
      writePrivateJson(stateFile, state)
    }
  }
  catch (error) {
    await service.stop()
    throw error
  }
  return {
    migrationUrl: url(OWNER, DATABASE), databaseUrl: url(APP, DATABASE), adminUrl: url(OWNER, 'postgres'), execute, ended: service.ended,
    async stop() {
      await service.stop()
      release()
    },
    remove() {
      rmSync(home, { recursive: true, force: true })
      rmSync(stateFile, { force: true })
    },
  }
}

/**
 * @param {string} data
 * @param {number} port
 * @param {boolean} durable
 */
function serverArguments(data, port, durable) {
  const settings = {
    listen_addresses: '127.0.0.1', port, unix_socket_directories: '', timezone: 'UTC', log_timezone: 'UTC',
    ...(durable ? {} : { fsync: 'off', full_page_writes: 'off', synchronous_commit: 'off' }),
  }
  return ['-D', data, ...Object.entries(settings).flatMap(([name, value]) => ['-c', `${name}=${value}`])]
}
