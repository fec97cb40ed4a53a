import { bigint, boolean, index, integer, pgTable, primaryKey, text, uuid } from 'drizzle-orm/pg-core'
import { bytea, createdAt, id } from '../columns'

/** Bytes as received, in numbered chunks. Pending until the transaction that refers to them keeps them. */
export const blob = pgTable('blob', {
  id: id(),
  sealed: boolean('sealed').notNull(),
  pending: boolean('pending').notNull().default(true),
  size: bigint('size', { mode: 'number' }).notNull(),
  /** SHA-256 of the bytes before sealing, hex. */
  hash: text('hash').notNull(),
  chunks: integer('chunks').notNull(),
  createdAt: createdAt(),
}, t => [index().on(t.pending, t.createdAt)])

export const blobChunk = pgTable('blob_chunk', {
  blobId: uuid('blob_id').notNull(),
  number: integer('number').notNull(),
  bytes: bytea('bytes').notNull(),
}, t => [primaryKey({ columns: [t.blobId, t.number] })])
