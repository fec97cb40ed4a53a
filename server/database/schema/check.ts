import { foreignKey, index, integer, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import type { AllocationId, CheckId, ExtractId, PlanId, ReleaseId, StudyEventId } from '../../../shared/schemas/domainIds'
import type { PersonId, StudyId } from '../../../shared/schemas/ids'
import { bytea, createdAt, id } from '../columns'
import { allocation, extract } from './extract'
import { person } from './person'
import { plan } from './plan'
import { study } from './study'

/**
 * One run of the judge. Append-only: a cleared query or a newly arrived allocation list makes a further run of
 * the same extract under the same plan version; the newest one counts. The report holds figures by arm and
 * leaves the server through `release` alone; its hash is for cleared members only.
 */
export const check = pgTable('check', {
  id: id().$type<CheckId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull(),
  extractId: uuid('extract_id').$type<ExtractId>().notNull(),
  planId: uuid('plan_id').$type<PlanId>().notNull(),
  allocationId: uuid('allocation_id').$type<AllocationId>(),
  run: integer('run').notNull(),
  engine: text('engine').notNull(),
  reportBytes: bytea('report_bytes').notNull(),
  reportHash: text('report_hash').notNull(),
  createdAt: createdAt(),
}, t => [
  unique().on(t.studyId, t.id),
  unique().on(t.extractId, t.run),
  foreignKey({ columns: [t.studyId, t.extractId], foreignColumns: [extract.studyId, extract.id] }),
  foreignKey({ columns: [t.studyId, t.planId], foreignColumns: [plan.studyId, plan.id] }),
  foreignKey({ columns: [t.studyId, t.allocationId], foreignColumns: [allocation.studyId, allocation.id] }),
])

/**
 * Which verdicts of a check may be told to everybody, and since when. Arm-free and open-label verdicts are
 * entered when they are judged, the others by a cleared member's signature.
 */
export const release = pgTable('release', {
  id: id().$type<ReleaseId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull(),
  extractId: uuid('extract_id').$type<ExtractId>().notNull(),
  checkId: uuid('check_id').$type<CheckId>().notNull(),
  analyses: jsonb('analyses').$type<string[]>().notNull(),
  /** Null where nobody had to sign. */
  signatureId: uuid('signature_id'),
  releasedBy: uuid('released_by').$type<PersonId>().references(() => person.id),
  releasedAt: createdAt(),
}, t => [
  unique().on(t.studyId, t.id),
  foreignKey({ columns: [t.studyId, t.checkId], foreignColumns: [check.studyId, check.id] }),
  index().on(t.studyId, t.extractId),
])

/** Database locked, unlocked, method fixed, blind broken: signed, never undone. */
export const studyEvent = pgTable('study_event', {
  id: id().$type<StudyEventId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  kind: text('kind', { enum: ['database-locked', 'database-unlocked', 'method-fixed', 'blind-broken'] }).notNull(),
  extractId: uuid('extract_id').$type<ExtractId>(),
  reason: text('reason'),
  signatureId: uuid('signature_id').notNull(),
  signedBy: uuid('signed_by').$type<PersonId>().notNull().references(() => person.id),
  at: createdAt(),
}, t => [
  unique().on(t.studyId, t.id),
  foreignKey({ columns: [t.studyId, t.extractId], foreignColumns: [extract.studyId, extract.id] }),
])
