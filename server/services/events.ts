import { and, asc, count, eq } from 'drizzle-orm'
import type { ExtractId, StudyEventId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { studyEvent } from '../database/schema/check'
import { dataQuery, extract } from '../database/schema/extract'
import { person } from '../database/schema/person'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { bindingExtract } from './binding'
import { isCurrent } from './checkInputs'
import { newestCheck } from './checkedReports'
import { requireSettled } from './methodFixed'
import { notify } from './notices'
import { appendRecord } from './record'
import { sign, signatureById, type Credentials } from './signatures'
import { actorOf, type Viewer } from './viewer'

type EventRow = typeof studyEvent.$inferSelect
type EventKind = EventRow['kind']
type StudyRow = typeof study.$inferSelect

/** Every event of a study, oldest first. */
export async function listEvents(db: Queryable, { studyId }: { studyId: StudyId }) {
  const rows = await db.select({ event: studyEvent, by: { id: person.id, name: person.name }, number: extract.number }).from(studyEvent)
    .innerJoin(person, eq(person.id, studyEvent.signedBy))
    .leftJoin(extract, and(eq(extract.studyId, studyEvent.studyId), eq(extract.id, studyEvent.extractId)))
    .where(eq(studyEvent.studyId, studyId)).orderBy(asc(studyEvent.at), asc(studyEvent.id))
  return {
    events: await Promise.all(rows.map(async ({ event, by, number }) => ({
      id: event.id, kind: event.kind, reason: event.reason, by, at: event.at,
      extract: event.extractId === null || number === null ? null : { id: event.extractId, number },
      signature: await signatureById(db, { studyId, signatureId: event.signatureId }),
    }))),
  }
}

async function hasHappened(tx: Transaction, studyId: StudyId, kind: EventKind): Promise<boolean> {
  const rows = await tx.select({ id: studyEvent.id }).from(studyEvent).where(and(eq(studyEvent.studyId, studyId), eq(studyEvent.kind, kind))).limit(1)
  return rows.length > 0
}

interface Signing extends Credentials {
  readonly studyId: StudyId
  readonly reason: string | null
  readonly viewer: Viewer
}

interface NewEvent { readonly kind: EventKind, readonly extract: { readonly id: ExtractId, readonly number: number } | null }

/** Writes the event under its signature, with its entry in the record. */
async function enter(tx: Transaction, { studyId, viewer, reason, identifier, password }: Signing, { kind, extract: named }: NewEvent) {
  const id = newId<StudyEventId>()
  const signature = await sign(tx, { studyId, viewer, identifier, password, meaning: kind, subject: id, content: { kind, extract: named?.id ?? null, reason }, reason })
  const row = onlyRow(await tx.insert(studyEvent).values({
    id, studyId, kind, extractId: named?.id ?? null, reason, signatureId: signature.id, signedBy: viewer.person.id,
  }).returning())
  await notify(tx, { studyId, kind: 'event', id })
  await appendRecord(tx, {
    chain: { studyId }, actor: actorOf(viewer), action: `study.${kind}`, subject: id, detail: { extract: named?.number ?? null, reason },
  })
  return {
    id, kind, reason, extract: named, at: row.at, by: { id: viewer.person.id, name: viewer.person.name },
    signature: await signatureById(tx, { studyId, signatureId: signature.id }),
  }
}

async function lockStudy(tx: Transaction, studyId: StudyId): Promise<StudyRow> {
  const [row] = await tx.select().from(study).where(eq(study.id, studyId)).for('update')
  if (!row) throw new DomainError('not-found')
  return row
}

/** The extract can bind: it stands at the decision point, is judged with all that is there, and nothing about it is open. */
async function requireLockable(tx: Transaction, studyId: StudyId, extractId: ExtractId) {
  const [row] = await tx.select().from(extract).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId))).for('update')
  if (!row) throw new DomainError('not-found')
  if (row.standing !== 'decision-point') throw new DomainError('wrong-state', [{ pointer: '/extractId', code: 'not-at-decision-point' }])
  if (row.state !== 'checked') throw new DomainError('wrong-state', [{ pointer: '/extractId', code: 'not-judged' }])
  const { n } = onlyRow(await tx.select({ n: count() }).from(dataQuery)
    .where(and(eq(dataQuery.studyId, studyId), eq(dataQuery.extractId, extractId), eq(dataQuery.state, 'open'))))
  if (n > 0) throw new DomainError('queries-open', [{ code: 'queries-open', params: { count: n } }])
  const checked = await newestCheck(tx, { studyId, extractId })
  const needsArms = checked.plan.document.blinding === 'blinded' && checked.report.analyses.some(({ dependsOnArms }) => dependsOnArms)
  if (needsArms && checked.report.allocation.state === 'none') throw new DomainError('wrong-state', [{ code: 'allocation-missing' }])
  if (!await isCurrent(tx, checked)) throw new DomainError('wrong-state', [{ pointer: '/extractId', code: 'being-judged' }])
  return row
}

/** From now on the verdicts of the extract it names are the binding ones. */
export function lockDatabase(db: Database, { extractId, ...signing }: Signing & { readonly extractId: ExtractId }) {
  return db.transaction(async (tx) => {
    await lockStudy(tx, signing.studyId)
    if (await bindingExtract(tx, signing.studyId) !== null) throw new DomainError('already-done', [{ code: 'database-is-locked' }])
    const { id, number } = await requireLockable(tx, signing.studyId, extractId)
    return enter(tx, signing, { kind: 'database-locked', extract: { id, number } })
  })
}

/** Supersedes the lock; what was decided under it stays in the record. */
export function unlockDatabase(db: Database, signing: Signing) {
  return db.transaction(async (tx) => {
    await lockStudy(tx, signing.studyId)
    const bindingId = await bindingExtract(tx, signing.studyId)
    if (bindingId === null) throw new DomainError('wrong-state', [{ code: 'database-not-locked' }])
    if (await hasHappened(tx, signing.studyId, 'method-fixed')) throw new DomainError('wrong-state', [{ code: 'method-is-fixed' }])
    const { number } = onlyRow(await tx.select({ number: extract.number }).from(extract).where(and(eq(extract.studyId, signing.studyId), eq(extract.id, bindingId))))
    return enter(tx, signing, { kind: 'database-unlocked', extract: { id: bindingId, number } })
  })
}

/** Every binding verdict is settled and its memo signed: from here on the analysis may be run. */
export function fixMethod(db: Database, signing: Signing) {
  return db.transaction(async (tx) => {
    await lockStudy(tx, signing.studyId)
    if (await hasHappened(tx, signing.studyId, 'method-fixed')) throw new DomainError('already-done')
    const bindingId = await bindingExtract(tx, signing.studyId)
    if (bindingId === null) throw new DomainError('wrong-state', [{ code: 'database-not-locked' }])
    const checked = await newestCheck(tx, { studyId: signing.studyId, extractId: bindingId })
    await requireSettled(tx, checked)
    return enter(tx, signing, { kind: 'method-fixed', extract: { id: bindingId, number: checked.extract.number } })
  })
}

/** Opens the allocation for everybody. Before the method is fixed it needs a reason, and verdicts after it say so. */
export function breakBlind(db: Database, signing: Signing) {
  return db.transaction(async (tx) => {
    const { blinded, blindBrokenAt } = await lockStudy(tx, signing.studyId)
    if (!blinded) throw new DomainError('wrong-state', [{ code: 'study-open-label' }])
    if (blindBrokenAt !== null) throw new DomainError('already-done')
    const fixed = await hasHappened(tx, signing.studyId, 'method-fixed')
    if (!fixed && signing.reason === null) throw new DomainError('invalid-input', [{ pointer: '/reason', code: 'required' }])
    const event = await enter(tx, signing, { kind: 'blind-broken', extract: null })
    await tx.update(study).set({ blindBrokenAt: event.at }).where(eq(study.id, signing.studyId))
    return event
  })
}
