import { boolean, pgTable, text } from 'drizzle-orm/pg-core'
import type { StudyId } from '../../../shared/schemas/ids'
import { STUDY_PHASES } from '../../../shared/schemas/study'
import { createdAt, id, moment } from '../columns'

export const study = pgTable('study', {
  id: id().$type<StudyId>(),
  protocolNumber: text('protocol_number').notNull().unique(),
  title: text('title').notNull(),
  phase: text('phase', { enum: STUDY_PHASES }).notNull(),
  sponsor: text('sponsor').notNull(),
  demo: boolean('demo').notNull().default(false),
  createdAt: createdAt(),
  /** Counts as blinded until a signed plan says open-label; kept by the signing of plans. */
  blinded: boolean('blinded').notNull().default(true),
  /** Kept by the event *blind broken*. */
  blindBrokenAt: moment('blind_broken_at'),
})
