import { and, eq } from 'drizzle-orm'
import { say } from '../../shared/wording/say'
import type { Database } from '../database/client'
import { deviation, memo } from '../database/schema/deviation'
import { person } from '../database/schema/person'
import { study } from '../database/schema/study'
import type { MailJob } from '../jobs/queues'
import { invitationLink } from '../services/invitationToken'

export interface Mail {
  readonly to: string
  readonly subject: string
  readonly text: string
}

interface Place { readonly origin: string, readonly authSecret: string }

type Facts = { readonly params: Record<string, string | number>, readonly link: string }

async function deviationFacts(db: Database, { studyId, deviationId }: Extract<MailJob, { kind: 'deviation-opened' }>, { origin }: Place): Promise<Facts | null> {
  const [row] = await db.select({ number: deviation.number, dueAt: deviation.dueAt, protocolNumber: study.protocolNumber }).from(deviation)
    .innerJoin(study, eq(study.id, deviation.studyId)).where(and(eq(deviation.studyId, studyId), eq(deviation.id, deviationId)))
  return row ? { params: { number: row.number, protocolNumber: row.protocolNumber, due: row.dueAt.toISOString().slice(0, 10) }, link: `${origin}/studies/${studyId}/deviations/${deviationId}` } : null
}

async function memoFacts(db: Database, { studyId, memoId }: Extract<MailJob, { kind: 'memo-issued' }>, { origin }: Place): Promise<Facts | null> {
  const [row] = await db.select({ number: memo.number, protocolNumber: study.protocolNumber }).from(memo)
    .innerJoin(study, eq(study.id, memo.studyId)).where(and(eq(memo.studyId, studyId), eq(memo.id, memoId)))
  return row ? { params: { number: row.number, protocolNumber: row.protocolNumber }, link: `${origin}/studies/${studyId}/memos` } : null
}

function factsOf(db: Database, job: MailJob, place: Place): Promise<Facts | null> | Facts {
  switch (job.kind) {
    case 'invitation': return { params: {}, link: invitationLink(place.origin, place.authSecret, job.invitationId) }
    case 'deviation-opened': return deviationFacts(db, job, place)
    case 'memo-issued': return memoFacts(db, job, place)
  }
}

/**
 * Writes a mail from what stands now: greeting, what happened, where to go, caution. It says nothing that
 * depends on arms. Null when its recipient or its matter is gone.
 */
export async function composeMail(db: Database, job: MailJob, place: Place): Promise<Mail | null> {
  const [recipient] = await db.select({ name: person.name, email: person.email, deactivatedAt: person.deactivatedAt }).from(person).where(eq(person.id, job.to))
  const facts = await factsOf(db, job, place)
  if (!recipient || recipient.deactivatedAt !== null || !facts) return null
  const lead = `mail.${job.kind}`
  const paragraphs = [
    say('en', 'mail.greeting', { name: recipient.name }), say('en', `${lead}.body`, facts.params), facts.link,
    say('en', 'mail.closing'), `${say('en', 'base.cautionLead')} ${say('en', 'base.caution')}`,
  ]
  return { to: recipient.email, subject: say('en', `${lead}.subject`, facts.params), text: `${paragraphs.join('\n\n')}\n` }
}
