import { mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { makeDataDir, makePassword, makeSecrets } from '../../../scripts/secrets.mjs'
import { readMigrationConfig } from '../../../server/config'

describe('secrets of an installation', () => {
  let parent: string
  let folder: string
  beforeEach(() => {
    parent = mkdtempSync(join(tmpdir(), 'stipule-secrets-'))
    folder = join(parent, 'data')
    makeDataDir(folder)
  })
  afterEach(() => rmSync(parent, { recursive: true }))
  const modeOf = (name: string) => (statSync(join(folder, name)).mode & 0o777).toString(8)

  it('are those that the server reads, and nobody else may', () => {
    expect(makeSecrets(folder)).toBe(true)
    const { secrets } = readMigrationConfig({
      DATABASE_URL: 'postgres://a@127.0.0.1/x', MIGRATION_DATABASE_URL: 'postgres://b@127.0.0.1/x', STIPULE_DATA_DIR: folder, STIPULE_ORIGIN: 'http://127.0.0.1:3000',
    })
    expect(secrets.allocationKey).toHaveLength(32)
    expect(secrets.commitmentKey).toHaveLength(32)
    expect(secrets.commitmentKey).not.toEqual(secrets.allocationKey)
    expect([modeOf('secrets.json'), modeOf('keys'), modeOf('.')]).toEqual(['600', '700', '711'])
  })

  it('stay as they are: sealed lists open with no others', () => {
    makeSecrets(folder)
    const before = readFileSync(join(folder, 'secrets.json'), 'utf8')
    expect(makeSecrets(folder)).toBe(false)
    expect(readFileSync(join(folder, 'secrets.json'), 'utf8')).toBe(before)
  })

  it('are not made anew over a file that cannot be read', () => {
    writeFileSync(join(folder, 'secrets.json'), '{ "authSecret": ')
    expect(() => makeSecrets(folder)).toThrow('secrets.json cannot be read')
  })

  it('has passwords that stand in an address and in a statement as they are', () => {
    const password = makePassword()
    expect(password).toMatch(/^[\w-]{32}$/)
    expect(makePassword()).not.toBe(password)
  })
})
