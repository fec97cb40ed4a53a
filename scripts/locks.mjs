// @ts-check
import { linkSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { setTimeout as delay } from 'node:timers/promises'
import { say } from './say.mjs'

/**
 * A process as no other one is named: ids are given again, so the moment it began (in ticks since boot) belongs
 * to it. Null when there is no such process.
 *
 * @param {number} pid
 */
function identityOf(pid) {
  try {
    const fields = readFileSync(`/proc/${pid}/stat`, 'utf8').replace(/^.*\) /s, '').split(' ')
    return `${pid} ${fields[19]}`
  }
  catch {
    return null
  }
}

/** @param {string} file */
function holderOf(file) {
  try {
    const text = readFileSync(file, 'utf8')
    const pid = Number.parseInt(text, 10)
    return identityOf(pid) === text ? pid : null
  }
  catch {
    return null
  }
}

/**
 * Takes a lock that dies with its process.
 *
 * @param {string} file
 * @returns {{ holder: number } | { holder: null, release: () => void }} the process that has it, or the lock.
 */
export function tryLock(file) {
  const own = `${file}.${process.pid}`
  writeFileSync(own, identityOf(process.pid) ?? '')
  try {
    for (let attempt = 0; attempt < 3; attempt++) {
      try {
        linkSync(own, file)
        return { holder: null, release: () => rmSync(file, { force: true }) }
      }
      catch (error) {
        if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'EEXIST') throw error
        const holder = holderOf(file)
        if (holder !== null) return { holder }
        rmSync(file, { force: true }) // left over by a process that was ended by force
      }
    }
    return { holder: holderOf(file) ?? 0 }
  }
  finally {
    rmSync(own, { force: true })
  }
}

/**
 * Does something while no other process does the same.
 *
 * @template T
 * @param {string} file
 * @param {AbortSignal} signal
 * @param {() => Promise<T>} work
 * @returns {Promise<T>}
 */
export async function alone(file, signal, work) {
  let lock = tryLock(file)
  if (lock.holder !== null) say(`Waiting for process ${lock.holder}, which is preparing the same folder.`)
  while (lock.holder !== null) {
    await delay(500, undefined, { signal }).catch(() => signal.throwIfAborted())
    lock = tryLock(file)
  }
  try {
    return await work()
  }
  finally {
    lock.release()
  }
}
