import { bigint, index, integer, pgEnum, pgTable, text, uuid, varchar } from 'drizzle-orm/pg-core'
import type { PersonId, SessionId } from '../../../shared/schemas/ids'
import { createdAt, id, moment } from '../columns'
import { person } from './person'

export const sessionEnd = pgEnum('session_end', ['signed-out', 'ended-by-person', 'idle', 'too-old', 'deactivated', 'password-changed'])

/** One sign-in. Its id is the `sid` of the browser's token; the row decides, the token only points at it. */
export const signInSession = pgTable('sign_in_session', {
  id: id().$type<SessionId>(),
  personId: uuid('person_id').$type<PersonId>().notNull().references(() => person.id),
  createdAt: createdAt(),
  lastSeenAt: moment('last_seen_at').notNull().defaultNow(),
  factor: text('factor', { enum: ['password'] }).notNull(),
  /** Network address that the sign-in came from. */
  origin: text('origin').notNull(),
  endedAt: moment('ended_at'),
  endedWhy: sessionEnd('ended_why'),
}, t => [index().on(t.personId)])

/** Counters of attempts; names and order of the columns are those that rate-limiter-flexible writes. */
export const attemptCount = pgTable('attempt_count', {
  key: varchar('key', { length: 255 }).primaryKey(),
  points: integer('points').notNull().default(0),
  expire: bigint('expire', { mode: 'number' }),
})
