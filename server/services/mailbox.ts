import { desc, eq } from 'drizzle-orm'
import type { Queryable } from '../database/client'
import { mailMessage } from '../database/schema/mail'
import type { Viewer } from './viewer'

/** Mails that the demo's server received for the viewer, newest first. */
export async function readMailbox(db: Queryable, { viewer }: { viewer: Viewer }) {
  const { id, sender, subject, body, receivedAt } = mailMessage
  const messages = await db.select({ id, sender, subject, body, receivedAt }).from(mailMessage)
    .where(eq(mailMessage.recipient, viewer.person.email)).orderBy(desc(receivedAt)).limit(100)
  return { messages }
}
