import { sql } from 'drizzle-orm'
import { pgEnum, pgTable, text, unique, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { STUDY_ROLES } from '../../../shared/access/actions'
import type { ClearanceId, MemberId, PersonId, StudyId } from '../../../shared/schemas/ids'
import { id, moment } from '../columns'
import { person } from './person'
import { study } from './study'

export const studyRole = pgEnum('study_role', STUDY_ROLES)

/** One role of one person in one study, from a moment until another; never deleted. */
export const studyMember = pgTable('study_member', {
  id: id().$type<MemberId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  personId: uuid('person_id').$type<PersonId>().notNull().references(() => person.id),
  role: studyRole('role').notNull(),
  reason: text('reason').notNull(),
  grantedBy: uuid('granted_by').$type<PersonId>().notNull().references(() => person.id),
  from: moment('from').notNull().defaultNow(),
  endedBy: uuid('ended_by').$type<PersonId>().references(() => person.id),
  endReason: text('end_reason'),
  until: moment('until'),
}, t => [
  unique().on(t.studyId, t.id),
  uniqueIndex('study_member_one_role').on(t.studyId, t.personId, t.role).where(sql`${t.until} is null`),
])

/** Permission to see arms: proposed, granted, ended. In force from `grantedAt` until `endedAt`. */
export const clearance = pgTable('clearance', {
  id: id().$type<ClearanceId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  personId: uuid('person_id').$type<PersonId>().notNull().references(() => person.id),
  reason: text('reason').notNull(),
  proposedBy: uuid('proposed_by').$type<PersonId>().notNull().references(() => person.id),
  proposedAt: moment('proposed_at').notNull().defaultNow(),
  grantedBy: uuid('granted_by').$type<PersonId>().references(() => person.id),
  grantedAt: moment('granted_at'),
  endedBy: uuid('ended_by').$type<PersonId>().references(() => person.id),
  endedAt: moment('ended_at'),
  endReason: text('end_reason'),
}, t => [
  unique().on(t.studyId, t.id),
  uniqueIndex('clearance_one_open').on(t.studyId, t.personId).where(sql`${t.endedAt} is null`),
])

export const exposureWay = pgEnum('exposure_way', ['allocation', 'arm-level-view', 'disclosure'])

/** Since when somebody has known allocation or arm-level figures of a study, and how. Permanent. */
export const exposure = pgTable('exposure', {
  id: id(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  personId: uuid('person_id').$type<PersonId>().notNull().references(() => person.id),
  how: exposureWay('how').notNull(),
  /** Id of the allocation list, extract or disclosure it began with. */
  subject: text('subject').notNull(),
  since: moment('since').notNull().defaultNow(),
}, t => [
  unique().on(t.studyId, t.id),
  unique('exposure_once_per_way').on(t.studyId, t.personId, t.how),
])
