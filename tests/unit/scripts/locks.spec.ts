import { spawnSync } from 'node:child_process'
import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { alone, tryLock } from '../../../scripts/locks.mjs'

describe('locks', () => {
  let folder: string
  let file: string
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'stipule-locks-'))
    file = join(folder, 'lock')
    vi.spyOn(process.stderr, 'write').mockReturnValue(true)
  })
  afterEach(() => {
    vi.restoreAllMocks()
    rmSync(folder, { recursive: true })
  })

  it('are held by one process until it releases them', () => {
    const lock = tryLock(file)
    expect(tryLock(file)).toEqual({ holder: process.pid })
    if (lock.holder === null) lock.release()
    expect(readdirSync(folder)).toEqual([])
    expect(tryLock(file).holder).toBeNull()
  })

  it.each([
    ['whose process has ended', () => `${spawnSync('true').pid} 1`],
    ['whose process number belongs to another process by now', () => `${process.pid} 1`],
    ['that was never written out', () => ''],
  ])('are taken over from one %s', (_, content) => {
    writeFileSync(file, content())
    expect(tryLock(file).holder).toBeNull()
  })

  it('let one work after the other', async () => {
    const order: string[] = []
    const work = (name: string) => alone(file, new AbortController().signal, async () => {
      order.push(`${name} begins`)
      await new Promise(resolve => setTimeout(resolve, 20))
      order.push(`${name} ends`)
    })
    await Promise.all([work('one'), work('two')])
    expect(order).toEqual(['one begins', 'one ends', 'two begins', 'two ends'])
  })

  it('are released when the work fails, and waiting ends when an end is wanted', async () => {
    const stopping = new AbortController()
    await expect(alone(file, stopping.signal, () => Promise.reject(new Error('broken')))).rejects.toThrow('broken')
    tryLock(file)
    const waiting = alone(file, stopping.signal, async () => 'never')
    stopping.abort(new Error('stopped'))
    await expect(waiting).rejects.toThrow('stopped')
  })
})
