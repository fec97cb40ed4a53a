import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { z } from 'zod'

type Environment = Readonly<Record<string, string | undefined>>

const postgresUrl = z.string().url().regex(/^postgres(ql)?:\/\//)
const webOrigin = z.string().url().refine(text => URL.canParse(text) && new URL(text).origin === text)
const flag = z.enum(['true', 'false']).transform(text => text === 'true')
const key = z.string().regex(/^[0-9a-f]{64}$/).transform(text => Uint8Array.from(Buffer.from(text, 'hex')))

const secretEntries = {
  STIPULE_AUTH_SECRET: z.string().min(32),
  STIPULE_ALLOCATION_KEY: key,
  STIPULE_COMMITMENT_KEY: key,
}

const commonEntries = {
  DATABASE_URL: postgresUrl,
  STIPULE_DATA_DIR: z.string().min(1),
  STIPULE_ORIGIN: webOrigin,
  ...secretEntries,
}

const servingEntries = z.object({
  ...commonEntries,
  AUTH_ORIGIN: z.string().url(),
  STIPULE_SMTP_URL: z.string().url().regex(/^smtps?:\/\//),
  STIPULE_MAIL_FROM: z.string().min(3),
  STIPULE_UPLOAD_LIMIT: z.coerce.number().int().positive().default(50 * 1024 * 1024),
  STIPULE_KEYS_DIR: z.string().min(1).optional(),
  STIPULE_DEMO: flag.default('false'),
  STIPULE_TRUST_PROXY: flag.default('false'),
}).refine(entries => entries.AUTH_ORIGIN === `${entries.STIPULE_ORIGIN}/api/auth`, { path: ['AUTH_ORIGIN'] })

const migrationEntries = z.object({ ...commonEntries, MIGRATION_DATABASE_URL: postgresUrl })

const secretsFile = z.object({ authSecret: z.string(), allocationKey: z.string(), commitmentKey: z.string() }).partial()

/** Entries of the environment that are absent or cannot be used; values are never quoted. */
export class ConfigurationError extends Error {
  constructor(readonly entries: readonly { readonly name: string, readonly fault: 'missing' | 'malformed' }[]) {
    super(`Configuration: ${entries.map(({ name, fault }) => `${name} ${fault}`).join(', ')}`)
    this.name = 'ConfigurationError'
  }
}

function storedSecrets(dataDir: string | undefined): Environment {
  if (!dataDir) return {}
  let text: string
  try {
    text = readFileSync(join(dataDir, 'secrets.json'), 'utf8')
  }
  catch {
    return {} // the entries themselves are then named as missing
  }
  const stored = secretsFile.parse(JSON.parse(text))
  return {
    STIPULE_AUTH_SECRET: stored.authSecret,
    STIPULE_ALLOCATION_KEY: stored.allocationKey,
    STIPULE_COMMITMENT_KEY: stored.commitmentKey,
  }
}

function parseEntries<Schema extends z.ZodTypeAny>(schema: Schema, environment: Environment): z.output<Schema> {
  const given = Object.fromEntries(Object.entries(environment).filter(([, value]) => value !== undefined && value !== ''))
  const entries: Environment = { ...storedSecrets(given.STIPULE_DATA_DIR), ...given }
  const parsed = schema.safeParse(entries)
  if (parsed.success) return parsed.data
  const names = new Set(parsed.error.issues.map(issue => String(issue.path[0])))
  throw new ConfigurationError([...names].map(name => ({ name, fault: entries[name] === undefined ? 'missing' : 'malformed' })))
}

const secretsOf = (entries: z.output<z.ZodObject<typeof secretEntries>>) => ({
  authSecret: entries.STIPULE_AUTH_SECRET,
  /** 32 bytes: seals allocation lists. */
  allocationKey: entries.STIPULE_ALLOCATION_KEY,
  /** 32 bytes: keyed commitments to bytes that contain allocation. */
  commitmentKey: entries.STIPULE_COMMITMENT_KEY,
})

/** What web server, worker and command line need, from the environment and `secrets.json`. */
export function readConfig(environment: Environment) {
  const entries = parseEntries(servingEntries, environment)
  return {
    databaseUrl: entries.DATABASE_URL,
    dataDir: entries.STIPULE_DATA_DIR,
    keysDir: entries.STIPULE_KEYS_DIR ?? join(entries.STIPULE_DATA_DIR, 'keys'),
    origin: entries.STIPULE_ORIGIN,
    smtpUrl: entries.STIPULE_SMTP_URL,
    mailFrom: entries.STIPULE_MAIL_FROM,
    /** Largest upload, in bytes. */
    uploadLimit: entries.STIPULE_UPLOAD_LIMIT,
    demo: entries.STIPULE_DEMO,
    /** Whether `X-Forwarded-For` is written by a proxy of our own. */
    trustProxy: entries.STIPULE_TRUST_PROXY,
    secrets: secretsOf(entries),
  } as const
}
export type Config = ReturnType<typeof readConfig>

/** What the migration needs: both roles' addresses and what the first administrator's link is made from. */
export function readMigrationConfig(environment: Environment) {
  const entries = parseEntries(migrationEntries, environment)
  return {
    databaseUrl: entries.DATABASE_URL,
    migrationUrl: entries.MIGRATION_DATABASE_URL,
    dataDir: entries.STIPULE_DATA_DIR,
    origin: entries.STIPULE_ORIGIN,
    secrets: secretsOf(entries),
  } as const
}

let current: Config | undefined

/** The configuration of this process, read once. */
export function config(): Config {
  current ??= readConfig(process.env)
  return current
}

export const migrationConfig = () => readMigrationConfig(process.env)
