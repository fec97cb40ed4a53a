import { sql, type SQL } from 'drizzle-orm'
import PgBoss from 'pg-boss'
import type { Transaction } from '../database/client'
import type { Jobs, Queue } from './queues'

/** Only ever sends through the transaction it is given; it opens no connection of its own. */
const sender = new PgBoss({
  db: { executeSql: () => Promise.reject(new Error('a job is enqueued inside a transaction')) },
  migrate: false, supervise: false, schedule: false,
})

/** What a driver would send for a value of pg-boss: JSON for objects, ISO 8601 for dates, null for nothing. */
function parameter(value: unknown): string | number | boolean | null {
  if (value === undefined || value === null) return null
  if (value instanceof Date) return value.toISOString()
  if (typeof value === 'object') return JSON.stringify(value)
  return value as string | number | boolean
}

/** pg-boss writes `$1`, Drizzle binds values: the text is taken apart at its placeholders. */
function bound(text: string, values: readonly unknown[]): SQL {
  const parts = text.split(/\$(\d+)/)
  return sql.join(parts.map((part, index) => index % 2 === 0 ? sql.raw(part) : sql`${parameter(values[Number(part) - 1])}`))
}

/** Enqueues a job with the transaction that causes it: they commit together or not at all. */
export async function enqueue<Q extends Queue>(tx: Transaction, queue: Q, data: Jobs[Q]): Promise<void> {
  const db = { executeSql: async (text: string, values: unknown[]) => ({ rows: [...await tx.execute(bound(text, values))] }) }
  const id = await sender.send(queue, data, { db })
  if (id === null) throw new Error(`no job was made in queue ${queue}`)
}
