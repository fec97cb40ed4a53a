// @ts-check
import { chownSync, existsSync, readFileSync, readlinkSync, realpathSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as delay } from 'node:timers/promises'
import { indent, run, runQuietly, sendSignal, tailOf } from './processes.mjs'
import { Refusal, say } from './say.mjs'

/** The role that owns everything and migrates. */
export const OWNER = 'stipule_owner'

/** @typedef {import('./cluster-place.mjs').Place} Place */

/**
 * The environment without the entries that would change what PostgreSQL's programs do.
 *
 * @param {NodeJS.ProcessEnv} [more]
 */
export const plainEnvironment = (more = {}) => ({
  ...Object.fromEntries(Object.entries(process.env).filter(([name]) => !name.startsWith('PG'))), ...more,
})

/**
 * Makes an empty cluster; what an interrupted attempt has left is removed first.
 *
 * @param {Place} place
 * @param {string} binaries
 * @param {string} log
 * @param {AbortSignal} signal
 */
export async function initialise({ data, home, state, account }, binaries, log, signal) {
  rmSync(data, { recursive: true, force: true })
  const passwordFile = join(home, 'password')
  writeFileSync(passwordFile, state.ownerPassword, { mode: 0o600 })
  if (account) chownSync(passwordFile, account.uid, account.gid)
  try {
    await runQuietly({
      what: 'Making the database cluster', command: join(binaries, 'initdb'), log, account, signal, cwd: '/', env: plainEnvironment(),
      args: ['-D', data, '-U', OWNER, '--auth=scram-sha-256', `--pwfile=${passwordFile}`, '--encoding=UTF8', '--locale=C.UTF-8'],
    })
  }
  finally {
    rmSync(passwordFile, { force: true })
  }
}

/**
 * Ends a server that still runs on this cluster although nobody holds its lock, and removes the note of one that
 * does not run: its process number may by now belong to something else.
 *
 * @param {string} data
 * @param {AbortSignal} signal
 */
export async function endLeftover(data, signal) {
  const note = join(data, 'postmaster.pid')
  if (!existsSync(note)) return
  const pid = Number.parseInt(readFileSync(note, 'utf8'), 10)
  if (!worksIn(pid, data)) return rmSync(note, { force: true })
  say('Stopping the database server that an interrupted run has left behind.')
  sendSignal(pid, 'SIGINT')
  for (let waited = 0; worksIn(pid, data); waited += 100) {
    if (waited > 60_000) throw new Refusal(`The database server ${pid}, left behind on ${data}, does not stop.`)
    await delay(100, undefined, { signal })
  }
}

/**
 * Whether a process works in this folder, as the server of a cluster does in its data.
 *
 * @param {number} pid
 * @param {string} data
 */
function worksIn(pid, data) {
  try {
    return readlinkSync(`/proc/${pid}/cwd`) === realpathSync(data)
  }
  catch {
    return false
  }
}

/**
 * @param {import('./processes.mjs').Service} service
 * @param {string} binaries
 * @param {number} port
 * @param {AbortSignal} signal
 */
export async function waitUntilReady(service, binaries, port, signal) {
  let ended = false
  service.ended.then(() => ended = true)
  for (let attempt = 0; attempt < 600; attempt++) {
    if (ended) throw new Refusal(`The database server did not start. The end of ${service.log}:\n${tailOf(service.log)}`)
    const { code } = await run({
      command: join(binaries, 'pg_isready'), args: ['-q', '-h', '127.0.0.1', '-p', String(port), '-U', OWNER, '-d', 'postgres'],
      env: plainEnvironment(), output: 'collect', signal,
    })
    if (code === 0) return
    await delay(100, undefined, { signal })
  }
  throw new Refusal(`The database server was not ready after a minute. The end of ${service.log}:\n${tailOf(service.log)}`)
}

/**
 * Executes statements. They go in by standard input, because arguments can be read by everybody on the machine.
 *
 * @param {string} binaries
 * @param {string} address
 * @param {string} statements
 * @param {AbortSignal} signal
 */
export async function psql(binaries, address, statements, signal) {
  const { hostname, port, username, password, pathname } = new URL(address)
  const { code, text } = await run({
    command: join(binaries, 'psql'), args: ['-X', '-q', '-v', 'ON_ERROR_STOP=1', '-h', hostname, '-p', port, '-U', username, '-d', pathname.slice(1), '-f', '-'],
    env: plainEnvironment({ PGPASSWORD: password }), input: statements, output: 'collect', signal,
  })
  if (code !== 0) throw new Refusal(`The database refused a statement:\n${indent(text)}`)
}
