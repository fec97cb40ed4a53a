import { boolean, foreignKey, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import type { CheckId, DeviationId, ExtractId, MemoId, PlanId } from '../../../shared/schemas/domainIds'
import type { PersonId, StudyId } from '../../../shared/schemas/ids'
import { bytea, createdAt, id, moment } from '../columns'
import { check } from './check'
import { person } from './person'
import { plan } from './plan'
import { study } from './study'

/** One per planned analysis; later extracts add entries. */
export const deviation = pgTable('deviation', {
  id: id().$type<DeviationId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  number: integer('number').notNull(),
  analysis: text('analysis').notNull(),
  planId: uuid('plan_id').$type<PlanId>().notNull(),
  state: text('state', { enum: ['open', 'under-observation', 'awaiting-second', 'settled', 'memo-signed', 'amended'] }).notNull().default('open'),
  dueAt: moment('due_at').notNull(),
  openedAt: createdAt(),
}, t => [
  unique().on(t.studyId, t.id),
  unique().on(t.studyId, t.number),
  unique().on(t.studyId, t.analysis),
  foreignKey({ columns: [t.studyId, t.planId], foreignColumns: [plan.studyId, plan.id] }),
])

/** A released verdict that opened or added to a deviation. */
export const deviationEntry = pgTable('deviation_entry', {
  id: id(),
  studyId: uuid('study_id').$type<StudyId>().notNull(),
  deviationId: uuid('deviation_id').$type<DeviationId>().notNull(),
  extractId: uuid('extract_id').$type<ExtractId>().notNull(),
  checkId: uuid('check_id').$type<CheckId>().notNull(),
  /** The verdict as everybody may see it. */
  verdict: jsonb('verdict').$type<unknown>().notNull(),
  releasedAt: moment('released_at').notNull(),
}, t => [
  unique().on(t.deviationId, t.checkId),
  foreignKey({ columns: [t.studyId, t.deviationId], foreignColumns: [deviation.studyId, deviation.id] }),
  foreignKey({ columns: [t.studyId, t.checkId], foreignColumns: [check.studyId, check.id] }),
])

/** Informed, not agreed. */
export const acknowledgement = pgTable('acknowledgement', {
  id: id(),
  studyId: uuid('study_id').$type<StudyId>().notNull(),
  deviationId: uuid('deviation_id').$type<DeviationId>().notNull(),
  decision: text('decision', { enum: ['acknowledged', 'declined'] }).notNull(),
  comment: text('comment'),
  personId: uuid('person_id').$type<PersonId>().notNull().references(() => person.id),
  signatureId: uuid('signature_id').notNull(),
  at: createdAt(),
}, t => [
  unique().on(t.deviationId),
  foreignKey({ columns: [t.studyId, t.deviationId], foreignColumns: [deviation.studyId, deviation.id] }),
])

export const settlement = pgTable('settlement', {
  id: id(),
  studyId: uuid('study_id').$type<StudyId>().notNull(),
  deviationId: uuid('deviation_id').$type<DeviationId>().notNull(),
  checkId: uuid('check_id').$type<CheckId>().notNull(),
  kind: text('kind', { enum: ['accept-step', 'keep-under-observation', 'amend-plan', 'report-without-claim', 'overrule'] }).notNull(),
  note: text('note').notNull(),
  settledBy: uuid('settled_by').$type<PersonId>().notNull().references(() => person.id),
  signatureId: uuid('signature_id').notNull(),
  secondBy: uuid('second_by').$type<PersonId>().references(() => person.id),
  secondSignatureId: uuid('second_signature_id'),
  secondAt: moment('second_at'),
  at: createdAt(),
}, t => [
  unique().on(t.studyId, t.id),
  foreignKey({ columns: [t.studyId, t.deviationId], foreignColumns: [deviation.studyId, deviation.id] }),
])

/** One per settlement. `content` is what is signed (canonical JSON); the PDF is made from it by a worker. */
export const memo = pgTable('memo', {
  id: id().$type<MemoId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull(),
  number: integer('number').notNull(),
  deviationId: uuid('deviation_id').$type<DeviationId>().notNull(),
  settlementId: uuid('settlement_id').notNull(),
  edition: text('edition', { enum: ['blinded', 'cleared', 'open-label'] }).notNull(),
  deviationClass: text('deviation_class', { enum: ['foreseen-switch', 'departure', 'unresolved'] }).notNull(),
  binding: boolean('binding').notNull(),
  state: text('state', { enum: ['awaiting-signature', 'rendering', 'issued', 'failed'] }).notNull(),
  content: bytea('content').notNull(),
  contentHash: text('content_hash').notNull(),
  signatureId: uuid('signature_id'),
  pdfBlobId: uuid('pdf_blob_id'),
  pdfHash: text('pdf_hash'),
  createdAt: createdAt(),
  issuedAt: moment('issued_at'),
}, t => [
  unique().on(t.studyId, t.id),
  unique().on(t.studyId, t.number),
  unique().on(t.settlementId),
  foreignKey({ columns: [t.studyId, t.deviationId], foreignColumns: [deviation.studyId, deviation.id] }),
  foreignKey({ columns: [t.studyId, t.settlementId], foreignColumns: [settlement.studyId, settlement.id] }),
])
