import { index, pgTable, text } from 'drizzle-orm/pg-core'
import { createdAt, id } from '../columns'

/** What the demo's local mail server received; the application shows each person their own. */
export const mailMessage = pgTable('mail_message', {
  id: id(),
  recipient: text('recipient').notNull(),
  sender: text('sender').notNull(),
  subject: text('subject').notNull(),
  body: text('body').notNull(),
  receivedAt: createdAt(),
}, t => [index().on(t.recipient, t.receivedAt)])
