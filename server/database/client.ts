import { drizzle, type PostgresJsDatabase } from 'drizzle-orm/postgres-js'
import postgres, { type Sql } from 'postgres'
import { config } from '../config'

export type Database = PostgresJsDatabase & { readonly $client: Sql }
export type Transaction = Parameters<Parameters<Database['transaction']>[0]>[0]
/** What a reading function takes: the pool, or the transaction it is part of. */
export type Queryable = Database | Transaction

export interface OpenDatabase {
  readonly db: Database
  readonly sql: Sql
  /** Lets running statements finish, then closes the connections. */
  readonly close: () => Promise<void>
}

/** At most this long between attempts to reach a database that went away, in seconds. */
const LONGEST_PAUSE = 1

/** A pool of connections that reconnects by itself; statements fail at once while the database is away. */
export function openDatabase(url: string, { max = 10 }: { max?: number } = {}): OpenDatabase {
  const sql = postgres(url, {
    max,
    connect_timeout: 5,
    backoff: attempt => Math.min(0.05 * 2 ** attempt, LONGEST_PAUSE),
    connection: { application_name: 'stipule' },
    onnotice: () => {},
  })
  return { db: drizzle(sql), sql, close: () => sql.end({ timeout: 5 }) }
}

let opened: OpenDatabase | undefined

/** The pool of this process. */
export function database(): Database {
  opened ??= openDatabase(config().databaseUrl)
  return opened.db
}

export async function closeDatabase(): Promise<void> {
  await opened?.close()
  opened = undefined
}
