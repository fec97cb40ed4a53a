import { mkdirSync, mkdtempSync, renameSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { contentHash } from '../../../scripts/content-hash.mjs'

describe('contentHash', () => {
  let root: string
  const write = (file: string, text: string) => writeFileSync(join(root, file), text)
  const hash = () => contentHash(root, { contents: ['app', 'config.ts'], names: ['pages'] })

  beforeEach(() => {
    root = mkdtempSync(join(tmpdir(), 'content hash '))
    for (const folder of ['app', 'app/deep', 'pages', 'other']) mkdirSync(join(root, folder))
    write('config.ts', 'x')
    write('app/deep/a.ts', 'a')
    write('app/b.ts', 'b')
    write('pages/index.vue', 'page')
  })
  afterEach(() => rmSync(root, { recursive: true }))

  it.each([
    ['a changed byte', () => write('app/deep/a.ts', 'A')],
    ['a new file', () => write('app/c.ts', '')],
    ['a renamed file', () => renameSync(join(root, 'app/b.ts'), join(root, 'app/c.ts'))],
    ['a removed file', () => rmSync(join(root, 'config.ts'))],
    ['bytes that move from one file to the next', () => {
      write('app/b.ts', '')
      write('app/deep/a.ts', 'ba')
    }],
    ['a new name where names count', () => write('pages/more.vue', '')],
  ])('sees %s', (_, change) => {
    const before = hash()
    change()
    expect(hash()).not.toBe(before)
  })

  it.each([
    ['a file that is written again unchanged', () => write('app/b.ts', 'b')],
    ['a change where only names count', () => write('pages/index.vue', 'changed')],
    ['a change elsewhere', () => write('other/x.ts', 'x')],
  ])('does not see %s', (_, change) => {
    const before = hash()
    change()
    expect(hash()).toBe(before)
  })

  it('is the same for folders that are not there', () => {
    expect(contentHash(root, { contents: ['none', 'app'] })).toBe(contentHash(root, { contents: ['app'] }))
  })
})
