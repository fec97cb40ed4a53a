import { bigint, date, foreignKey, index, integer, jsonb, pgEnum, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import type { ColumnMapping, Finding } from '../../../shared/contract/extracts'
import type { AllocationId, DataQueryId, ExtractId, PlanId } from '../../../shared/schemas/domainIds'
import type { PersonId, StudyId } from '../../../shared/schemas/ids'
import { createdAt, id, moment } from '../columns'
import { person } from './person'
import { plan } from './plan'
import { study } from './study'

export const extractState = pgEnum('extract_state', ['awaiting-mapping', 'refused', 'sealed', 'awaiting-reason', 'judging', 'checked', 'withdrawn'])
export const extractPurpose = pgEnum('extract_purpose', ['interim', 'database-lock'])
export const extractStanding = pgEnum('extract_standing', ['look', 're-cut', 'unscheduled', 'decision-point'])

/** One data file as received, with the plan version in force at that moment. */
export const extract = pgTable('extract', {
  id: id().$type<ExtractId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  number: integer('number').notNull(),
  planId: uuid('plan_id').$type<PlanId>().notNull(),
  state: extractState('state').notNull(),
  fileName: text('file_name').notNull(),
  cutOff: date('cut_off', { mode: 'string' }).notNull(),
  purpose: extractPurpose('purpose').notNull(),
  standing: extractStanding('standing'),
  look: text('look'),
  blobId: uuid('blob_id').notNull(),
  /** Mapped columns in binary form, rebuildable from the bytes. */
  columnsBlobId: uuid('columns_blob_id'),
  bytesHash: text('bytes_hash').notNull(),
  contentHash: text('content_hash'),
  size: bigint('size', { mode: 'number' }).notNull(),
  rows: integer('rows'),
  subjects: integer('subjects'),
  columns: jsonb('columns').$type<string[]>().notNull(),
  preview: jsonb('preview').$type<string[][]>(),
  mapping: jsonb('mapping').$type<ColumnMapping>(),
  findings: jsonb('findings').$type<Finding[]>().notNull(),
  findingCounts: jsonb('finding_counts').$type<{ refuse: number, hold: number, warn: number }>().notNull(),
  uploadedBy: uuid('uploaded_by').$type<PersonId>().notNull().references(() => person.id),
  receivedAt: createdAt(),
}, t => [
  unique().on(t.studyId, t.id),
  unique().on(t.studyId, t.number),
  foreignKey({ columns: [t.studyId, t.planId], foreignColumns: [plan.studyId, plan.id] }),
])

/** How a study's files name their columns, remembered from the last extract that was mapped. */
export const studyMapping = pgTable('study_mapping', {
  studyId: uuid('study_id').$type<StudyId>().primaryKey().references(() => study.id),
  mapping: jsonb('mapping').$type<ColumnMapping>().notNull(),
})

/** The sealed list of a blinded study. The newest accepted `true` list is the one in use. */
export const allocation = pgTable('allocation', {
  id: id().$type<AllocationId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  kind: text('kind', { enum: ['true', 'dummy'] }).notNull(),
  state: text('state', { enum: ['accepted', 'refused'] }).notNull(),
  blobId: uuid('blob_id').notNull(),
  /** SHA-256 of the bytes; for cleared members only. */
  hash: text('hash').notNull(),
  /** HMAC-SHA-256 of the bytes under the commitment key; opened after the blind is broken. */
  commitment: text('commitment').notNull(),
  subjects: integer('subjects').notNull(),
  findings: jsonb('findings').$type<Finding[]>().notNull(),
  uploadedBy: uuid('uploaded_by').$type<PersonId>().notNull().references(() => person.id),
  receivedAt: createdAt(),
}, t => [unique().on(t.studyId, t.id)])

/** What a held screen opens; no screen deletes a value. */
export const dataQuery = pgTable('data_query', {
  id: id().$type<DataQueryId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull(),
  number: integer('number').notNull(),
  extractId: uuid('extract_id').$type<ExtractId>().notNull(),
  screen: text('screen').notNull(),
  endpoint: text('endpoint').notNull(),
  rows: jsonb('rows').$type<number[]>().notNull(),
  count: integer('count').notNull(),
  state: text('state', { enum: ['open', 'cleared', 'overruled'] }).notNull().default('open'),
  note: text('note'),
  openedAt: createdAt(),
  resolvedAt: moment('resolved_at'),
}, t => [
  unique().on(t.studyId, t.id),
  unique().on(t.studyId, t.number),
  unique().on(t.extractId, t.screen, t.endpoint),
  foreignKey({ columns: [t.studyId, t.extractId], foreignColumns: [extract.studyId, extract.id] }),
  index().on(t.studyId, t.state),
])
