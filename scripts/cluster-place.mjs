// @ts-check
import { existsSync, readFileSync } from 'node:fs'
import { isAbsolute, join, relative, resolve } from 'node:path'
import { accountOf, makeClusterHome } from './cluster-home.mjs'
import { binariesOf, postgresqlVersions } from './packages.mjs'
import { freePort, portFault } from './ports.mjs'
import { readJson, writePrivateJson } from './private-file.mjs'
import { Refusal } from './say.mjs'
import { makePassword } from './secrets.mjs'

/**
 * @typedef {object} State what is remembered of a cluster, in a file that nobody else may read.
 * @property {string} home folder of the cluster; relative to the file's folder when it is inside.
 * @property {number} port
 * @property {string} ownerPassword
 * @property {string} appPassword
 * @property {boolean} complete whether roles and database have been made.
 *
 * @typedef {object} Place
 * @property {string} stateFile
 * @property {State} state
 * @property {string} home
 * @property {string} data
 * @property {import('./processes.mjs').Account | null} account
 */

/**
 * Finds or makes the place of a cluster, with its passwords.
 *
 * @param {string} stateDir
 * @returns {Place}
 */
export function placeOf(stateDir) {
  const stateFile = join(stateDir, 'postgres.json')
  const wanted = join(stateDir, 'postgres')
  let state = /** @type {State | null} */ (readJson(stateFile))
  if (!state) {
    if (existsSync(join(wanted, 'data'))) throw new Refusal(`${wanted} holds a database cluster whose passwords (${stateFile}) are gone. Bring them back, or move the folder away.`)
    const home = makeClusterHome(wanted)
    state = { home: home === wanted ? relative(stateDir, home) : home, port: 0, ownerPassword: makePassword(), appPassword: makePassword(), complete: false }
    writePrivateJson(stateFile, state)
  }
  const home = isAbsolute(state.home) ? state.home : resolve(stateDir, state.home)
  if (!existsSync(home)) throw new Refusal(`${stateFile} speaks of a database cluster in ${home}, which is gone. Bring it back, or remove the file to begin with an empty one.`)
  return { stateFile, state, home, data: join(home, 'data'), account: accountOf(home) }
}

/**
 * The folder of PostgreSQL's programs: those that made the cluster, else the newest.
 *
 * @param {Place} place
 */
export function binariesFor({ data }) {
  const versions = postgresqlVersions()
  const file = join(data, 'PG_VERSION')
  const version = existsSync(file) ? readFileSync(file, 'utf8').trim() : versions[0]
  if (version === undefined || !versions.includes(version)) {
    throw new Refusal(`The database cluster in ${data} was made by PostgreSQL ${version}, whose server is not installed (package postgresql-${version}).`)
  }
  return binariesOf(version)
}

/**
 * The port of last time when it is free, else another one, which is remembered.
 *
 * @param {Place} place
 */
export async function choosePort({ state, stateFile }) {
  if (state.port !== 0 && await portFault(state.port) === null) return state.port
  state.port = await freePort()
  writePrivateJson(stateFile, state)
  return state.port
}
