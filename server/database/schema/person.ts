import { sql } from 'drizzle-orm'
import { check, pgEnum, pgTable, text, uuid } from 'drizzle-orm/pg-core'
import type { InvitationId, PersonId } from '../../../shared/schemas/ids'
import { createdAt, id, moment } from '../columns'

export const installationRole = pgEnum('installation_role', ['administrator'])

/** Somebody with an account. Never deleted: the record names them. */
export const person = pgTable('person', {
  id: id().$type<PersonId>(),
  name: text('name').notNull(),
  /** The account's identifier, in lower case. */
  email: text('email').notNull().unique(),
  /** argon2id in PHC form; null until the invitation is taken up. */
  passwordHash: text('password_hash'),
  installationRole: installationRole('installation_role'),
  createdAt: createdAt(),
  deactivatedAt: moment('deactivated_at'),
}, t => [check('person_email_lower_case', sql`${t.email} = lower(${t.email})`)])

/**
 * A single-use right to set a password. The link carries a keyed code of this id, so nothing that opens an
 * account is stored. Without a person it is the right to become the first administrator.
 */
export const invitation = pgTable('invitation', {
  id: id().$type<InvitationId>(),
  personId: uuid('person_id').$type<PersonId>().references(() => person.id),
  createdAt: createdAt(),
  expiresAt: moment('expires_at').notNull(),
  usedAt: moment('used_at'),
  /** Replaced by a later invitation. */
  voidedAt: moment('voided_at'),
})
