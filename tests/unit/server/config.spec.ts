import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { ConfigurationError, readConfig, readMigrationConfig } from '../../../server/config'

const key = '0f'.repeat(32)
const secret = 'a secret of more than thirty-two characters'

const entriesOf = (run: () => unknown) => {
  try {
    run()
  }
  catch (error) {
    if (error instanceof ConfigurationError) return error.entries.map(({ name, fault }) => `${name} ${fault}`).sort()
    throw error
  }
  return []
}

describe('configuration', () => {
  let dataDir: string
  let environment: Record<string, string>

  beforeAll(() => {
    dataDir = mkdtempSync(join(tmpdir(), 'stipule-config-'))
    writeFileSync(join(dataDir, 'secrets.json'), JSON.stringify({ authSecret: secret, allocationKey: key, commitmentKey: key }))
    environment = {
      DATABASE_URL: 'postgres://stipule_app:x@127.0.0.1:5433/stipule', STIPULE_DATA_DIR: dataDir, STIPULE_ORIGIN: 'http://127.0.0.1:3000',
      AUTH_ORIGIN: 'http://127.0.0.1:3000/api/auth', STIPULE_SMTP_URL: 'smtp://127.0.0.1:2525', STIPULE_MAIL_FROM: 'Stipule <stipule@example.org>',
    }
  })
  afterAll(() => rmSync(dataDir, { recursive: true }))

  it('reads environment and stored secrets, with defaults', () => {
    const read = readConfig(environment)
    expect(read).toMatchObject({ origin: 'http://127.0.0.1:3000', uploadLimit: 50 * 1024 * 1024, demo: false, trustProxy: false, keysDir: join(dataDir, 'keys') })
    expect(read.secrets.authSecret).toBe(secret)
    expect(read.secrets.allocationKey).toEqual(new Uint8Array(32).fill(15))
  })

  it('prefers a secret of the environment to the stored one', () => {
    expect(readConfig({ ...environment, STIPULE_AUTH_SECRET: `${secret}!` }).secrets.authSecret).toBe(`${secret}!`)
  })

  it('names everything that is missing at once', () => {
    expect(entriesOf(() => readConfig({}))).toEqual([
      'AUTH_ORIGIN missing', 'DATABASE_URL missing', 'STIPULE_ALLOCATION_KEY missing', 'STIPULE_AUTH_SECRET missing', 'STIPULE_COMMITMENT_KEY missing',
      'STIPULE_DATA_DIR missing', 'STIPULE_MAIL_FROM missing', 'STIPULE_ORIGIN missing', 'STIPULE_SMTP_URL missing',
    ])
    expect(entriesOf(() => readConfig({ ...environment, DATABASE_URL: '' }))).toEqual(['DATABASE_URL missing'])
  })

  it.each([
    ['DATABASE_URL', 'mysql://x/y'], ['STIPULE_ORIGIN', 'http://127.0.0.1:3000/'], ['AUTH_ORIGIN', 'http://127.0.0.1:3000'],
    ['STIPULE_UPLOAD_LIMIT', '-1'], ['STIPULE_DEMO', 'yes'], ['STIPULE_ALLOCATION_KEY', 'abc'], ['STIPULE_SMTP_URL', 'http://mail'], ['STIPULE_AUTH_SECRET', 'short'],
  ])('names a malformed %s without quoting it', (name, value) => {
    const faults = entriesOf(() => readConfig({ ...environment, [name]: value }))
    expect(faults).toContain(`${name} malformed`)
    expect(() => readConfig({ ...environment, [name]: value })).not.toThrow(new RegExp(`${name}.*${value}`))
  })

  it('asks the migration for the owner\'s address too', () => {
    expect(entriesOf(() => readMigrationConfig(environment))).toEqual(['MIGRATION_DATABASE_URL missing'])
    const url = 'postgres://stipule_owner:x@127.0.0.1:5433/stipule'
    expect(readMigrationConfig({ ...environment, MIGRATION_DATABASE_URL: url })).toMatchObject({ migrationUrl: url })
  })
})
