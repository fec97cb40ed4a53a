// @ts-check
import { spawn } from 'node:child_process'
import { closeSync, mkdirSync, openSync, readFileSync, renameSync } from 'node:fs'
import { constants } from 'node:os'
import { dirname } from 'node:path'
import { Refusal } from './say.mjs'

/** Seconds that a program has for ending itself. */
const PATIENCE = 15

/**
 * @typedef {{ uid: number, gid: number }} Account the account a program runs as.
 * @typedef {object} Program
 * @property {string} command
 * @property {readonly string[]} args
 * @property {string} [cwd]
 * @property {NodeJS.ProcessEnv} [env]
 * @property {Account | null} [account] absent: the account of this script.
 * @property {string} [input] given on standard input.
 * @property {AbortSignal} [signal] ends the program when aborted.
 * @property {number} [minutes] ends the program when it takes longer.
 */

/** @typedef {'terminal' | 'stderr' | 'collect' | { file: string }} Output where a program's output goes. */

/**
 * Numbers exit codes as a shell does.
 *
 * @param {number | null} code
 * @param {NodeJS.Signals | null} signal
 */
const exitCodeOf = (code, signal) => code ?? 128 + (signal ? constants.signals[signal] : 0)

/**
 * Sends a signal to a process, or to its whole group when the id is negative; one that is gone is no error.
 *
 * @param {number} pid
 * @param {NodeJS.Signals} signal
 */
export function sendSignal(pid, signal) {
  try {
    process.kill(pid, signal)
  }
  catch (error) {
    if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'ESRCH') throw error
  }
}

/**
 * Opens a fresh log file; the one before is kept beside it.
 *
 * @param {string} file
 */
function openLog(file) {
  mkdirSync(dirname(file), { recursive: true })
  try {
    renameSync(file, `${file}.previous`)
  }
  catch (error) {
    if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'ENOENT') throw error
  }
  return openSync(file, 'a', 0o600)
}

/**
 * The last lines of a log file, indented.
 *
 * @param {string} file
 * @param {number} [lines]
 */
export function tailOf(file, lines = 20) {
  return indent(readFileSync(file, 'utf8').trimEnd().split('\n').slice(-lines).join('\n'))
}

/** @param {string} text */
export const indent = text => text.replace(/^/gm, '    ')

/**
 * Ends a program with all that it started, by force where asking does not help.
 *
 * @param {import('node:child_process').ChildProcess} child the leader of its process group.
 */
function endGroup({ pid }) {
  if (pid === undefined) return
  sendSignal(-pid, 'SIGTERM')
  setTimeout(() => sendSignal(-pid, 'SIGKILL'), PATIENCE * 1000).unref()
}

/**
 * Runs a program to its end. It has a process group of its own, so that Ctrl-C at the terminal reaches this
 * script alone, which then stops what it started.
 *
 * @param {Program & { output: Output }} program
 * @returns {Promise<{ code: number, text: string }>} its exit code, and its output when collected.
 */
export async function run({ command, args, cwd, env, account, input, signal, minutes, output }) {
  signal?.throwIfAborted()
  const log = typeof output === 'object' ? openLog(output.file) : null
  const target = log ?? (output === 'terminal' ? 'inherit' : output === 'stderr' ? 2 : 'pipe')
  const child = spawn(command, args, {
    cwd, env, detached: true, stdio: [input === undefined ? 'ignore' : 'pipe', target, output === 'terminal' ? 'inherit' : target],
    ...(account ?? {}),
  })
  if (log !== null) closeSync(log)
  let text = ''
  child.stdout?.on('data', chunk => text += chunk)
  child.stderr?.on('data', chunk => text += chunk)
  child.stdin?.on('error', () => {}) // a program that ends early says why in its exit code
  child.stdin?.end(input)
  const end = () => endGroup(child)
  const timer = minutes === undefined ? undefined : setTimeout(end, minutes * 60_000)
  signal?.addEventListener('abort', end)
  try {
    const code = await /** @type {Promise<number>} */ (new Promise((resolve, reject) => {
      child.on('error', reject)
      child.on('close', (code, name) => resolve(exitCodeOf(code, name)))
    }))
    signal?.throwIfAborted()
    return { code, text }
  }
  finally {
    clearTimeout(timer)
    signal?.removeEventListener('abort', end)
  }
}

/**
 * Runs a program whose output matters only when it fails.
 *
 * @param {Program & { what: string, log: string }} program `what` is the subject of "... failed".
 */
export async function runQuietly({ what, log, ...program }) {
  const { code } = await run({ ...program, output: { file: log } })
  if (code !== 0) throw new Refusal(`${what} failed with exit code ${code}. The end of ${log}:\n${tailOf(log)}`)
}

/**
 * @typedef {object} Service a program that is meant to go on.
 * @property {string} name
 * @property {string} log its log file.
 * @property {Promise<{ name: string, code: number, log: string }>} ended
 * @property {() => Promise<void>} stop asks it to end and waits; ends it by force after the patience.
 */

/**
 * Starts a program that is meant to go on, in a process group of its own.
 *
 * @param {Omit<Program, 'input' | 'signal' | 'minutes'> & {
 *   name: string, log: string, stopBy?: NodeJS.Signals, patience?: number, channel?: boolean }} program
 *   `patience` in seconds; with a `channel` the program learns when this script is gone.
 * @returns {Service}
 */
export function startService({ name, command, args, cwd, env, account, log, stopBy = 'SIGTERM', patience = PATIENCE, channel = false }) {
  const file = openLog(log)
  const child = spawn(command, args, {
    cwd, env, detached: true, stdio: ['ignore', file, file, ...(channel ? /** @type {const} */ (['ipc']) : [])], ...(account ?? {}),
  })
  closeSync(file)
  /** @type {Service['ended']} */
  const ended = new Promise((resolve) => {
    child.on('error', () => resolve({ name, code: 127, log }))
    child.on('exit', (code, signal) => resolve({ name, code: exitCodeOf(code, signal), log }))
  })
  return {
    name, log, ended,
    async stop() {
      const pid = child.pid
      if (pid === undefined || child.exitCode !== null || child.signalCode !== null) return
      sendSignal(pid, stopBy)
      const timer = setTimeout(() => sendSignal(-pid, 'SIGKILL'), patience * 1000)
      await ended
      clearTimeout(timer)
    },
  }
}
