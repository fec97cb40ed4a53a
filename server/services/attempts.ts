import { createHash } from 'node:crypto'
import type { Sql } from 'postgres'
import { RateLimiterPostgres, RateLimiterRes } from 'rate-limiter-flexible'
import type { Database } from '../database/client'
import { DomainError } from '../domainError'

type AttemptKind = 'sign-in' | 'signature' | 'invitation'

export interface Attempt {
  readonly kind: AttemptKind
  /** Whose secret is tried; stored only as its SHA-256. */
  readonly account: string
  /** Network address that the attempt comes from. */
  readonly origin: string
}

/** Failures allowed within the window, in seconds; one more closes the door for a window. */
const WINDOW = 15 * 60
export const ATTEMPTS_PER_ACCOUNT = 10
const ATTEMPTS_PER_ORIGIN = 100

interface Limiters { readonly account: RateLimiterPostgres, readonly origin: RateLimiterPostgres }

const limitersByPool = new WeakMap<Sql, Limiters>()

/** The limiter speaks to node-postgres; this is the part of it that the limiter uses, over our own pool. */
const clientOf = (sql: Sql) => ({
  async query({ text, values }: { text: string, values: (string | number | null)[] }) {
    const rows = await sql.unsafe(text, values)
    return { rows: [...rows], rowCount: rows.count }
  },
})

function makeLimiters(sql: Sql): Limiters {
  const common = { storeClient: clientOf(sql), storeType: 'client', tableName: 'attempt_count', tableCreated: true, duration: WINDOW, blockDuration: WINDOW }
  return {
    account: new RateLimiterPostgres({ ...common, keyPrefix: 'account', points: ATTEMPTS_PER_ACCOUNT }),
    origin: new RateLimiterPostgres({ ...common, keyPrefix: 'origin', points: ATTEMPTS_PER_ORIGIN }),
  }
}

function limitersOf(db: Database): Limiters {
  const known = limitersByPool.get(db.$client)
  if (known) return known
  const made = makeLimiters(db.$client)
  limitersByPool.set(db.$client, made)
  return made
}

const keysOf = ({ kind, account, origin }: Attempt) => ({
  account: `${kind}:${createHash('sha256').update(account).digest('hex')}`,
  origin: `${kind}:${origin}`,
})

async function consume(limiter: RateLimiterPostgres, key: string): Promise<void> {
  try {
    await limiter.consume(key)
  }
  catch (refused) {
    if (!(refused instanceof RateLimiterRes)) throw refused
    throw new DomainError('too-many-attempts', [], { retryAfter: Math.ceil(refused.msBeforeNext / 1000) })
  }
}

/**
 * Counts an attempt before it is made, so that attempts in parallel cannot slip past.
 *
 * @throws {DomainError} `too-many-attempts` with the seconds to wait.
 */
export async function countAttempt(db: Database, attempt: Attempt): Promise<void> {
  const limiters = limitersOf(db)
  const keys = keysOf(attempt)
  await consume(limiters.origin, keys.origin)
  await consume(limiters.account, keys.account)
}

/** A success: the account starts afresh, and the address gets this attempt back. */
export async function forgiveAttempt(db: Database, attempt: Attempt): Promise<void> {
  const limiters = limitersOf(db)
  const keys = keysOf(attempt)
  await limiters.account.delete(keys.account)
  await limiters.origin.reward(keys.origin)
}
