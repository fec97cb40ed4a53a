import { bigint, boolean, jsonb, pgTable, primaryKey, text, unique, uuid } from 'drizzle-orm/pg-core'
import type { EntryActor } from '../../../shared/record/entry'
import type { PersonId, StudyId } from '../../../shared/schemas/ids'
import { id, moment } from '../columns'
import { person } from './person'
import { study } from './study'

/** A field of an entry's detail; `armDependent` ones are masked for readers who are not cleared. */
export interface StoredField {
  readonly salt: string
  readonly value: string | number | boolean | null
  readonly armDependent?: true
}

/**
 * The append-only record. The table is partitioned by chain and guarded by triggers, which Drizzle cannot
 * express: see the custom migration. Columns are the members of the hashed head, then its hash and the detail.
 */
export const recordEntry = pgTable('record_entry', {
  chain: text('chain').notNull(),
  seq: bigint('seq', { mode: 'number' }).notNull(),
  format: text('format').notNull(),
  time: moment('time').notNull(),
  clockStepBack: boolean('clock_step_back').notNull(),
  actor: jsonb('actor').$type<EntryActor>().notNull(),
  requestId: text('request_id'),
  origin: text('origin'),
  action: text('action').notNull(),
  subject: text('subject').notNull(),
  detailHash: text('detail_hash').notNull(),
  previousHash: text('previous_hash').notNull(),
  hash: text('hash').notNull(),
  detail: jsonb('detail').$type<Record<string, StoredField>>().notNull(),
}, t => [primaryKey({ columns: [t.chain, t.seq] })])

/** The newest entry of each chain; locked while the next one is appended. */
export const chainHead = pgTable('chain_head', {
  chain: text('chain').primaryKey(),
  seq: bigint('seq', { mode: 'number' }).notNull(),
  hash: text('hash').notNull(),
  time: moment('time').notNull(),
})

/** A signature over the hash of exactly what was signed; append-only like the record. */
export const signature = pgTable('signature', {
  id: id(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  personId: uuid('person_id').$type<PersonId>().notNull().references(() => person.id),
  /** As printed then. */
  name: text('name').notNull(),
  role: text('role').notNull(),
  meaning: text('meaning').notNull(),
  /** Id of what was signed. */
  subject: uuid('subject').notNull(),
  hash: text('hash').notNull(),
  reason: text('reason'),
  requestId: text('request_id').notNull(),
  signedAt: moment('signed_at').notNull(),
}, t => [unique().on(t.studyId, t.id)])
