import { foreignKey, integer, jsonb, pgEnum, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core'
import type { PersonId, StudyId } from '../../../shared/schemas/ids'
import type { PlanId } from '../../../shared/schemas/domainIds'
import { bytea, createdAt, id, moment } from '../columns'
import { person } from './person'
import { study } from './study'

export const planState = pgEnum('plan_state', ['draft', 'awaiting-reviewer', 'signed', 'superseded'])

/** One version of a study's plan. The draft is `document`; what is signed is `bytes`, its canonical form. */
export const plan = pgTable('plan', {
  id: id().$type<PlanId>(),
  studyId: uuid('study_id').$type<StudyId>().notNull().references(() => study.id),
  version: integer('version').notNull(),
  state: planState('state').notNull().default('draft'),
  revision: integer('revision').notNull().default(1),
  document: jsonb('document').$type<unknown>().notNull(),
  bytes: bytea('bytes'),
  hash: text('hash'),
  amendsId: uuid('amends_id').$type<PlanId>(),
  amendmentReason: text('amendment_reason'),
  /** Everybody who made or saved this version; none of them may review it. */
  contributors: jsonb('contributors').$type<PersonId[]>().notNull(),
  authorId: uuid('author_id').$type<PersonId>().notNull().references(() => person.id),
  declaration: jsonb('declaration').$type<{ firstSubjectIn: string | null, dataSeen: 'none' | 'pooled' | 'by-arm' }>(),
  /** What had been received, released and seen when an amendment was signed. */
  knowledge: jsonb('knowledge').$type<PlanKnowledge>(),
  createdAt: createdAt(),
  /** When the last signature it needs was given. */
  signedAt: moment('signed_at'),
}, t => [
  unique().on(t.studyId, t.id),
  unique().on(t.studyId, t.version),
  foreignKey({ columns: [t.studyId, t.amendsId], foreignColumns: [t.studyId, t.id] }),
])

export interface PlanKnowledge {
  extractsReceived: number
  verdictsReleased: number
  deviationsOpen: number
  marks: ('after-interim-verdicts' | 'after-exposure' | 'exploratory')[]
}
