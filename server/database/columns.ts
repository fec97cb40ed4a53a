import { customType, timestamp, uuid } from 'drizzle-orm/pg-core'

/** Bytes as they are: what is hashed or signed, sealed files, salts. */
export const bytea = customType<{ data: Uint8Array, driverData: Uint8Array }>({ dataType: () => 'bytea' })

/** UUIDv7, made by the service that writes the row. */
export const id = () => uuid('id').primaryKey().notNull()

/** A moment, UTC, with milliseconds. */
export const moment = (name: string) => timestamp(name, { withTimezone: true, precision: 3, mode: 'date' })

export const createdAt = () => moment('created_at').notNull().defaultNow()
