import { and, eq, max, sql } from 'drizzle-orm'
import type { SeenAnalysis } from '../../shared/decision/report'
import type { CheckId, DeviationId, ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { deviation, deviationEntry } from '../database/schema/deviation'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { blindAnalyses, type JudgedCheck } from './blindReports'
import { opensDeviation, type ToldVerdict } from './deviationRules'
import { enqueueMail } from './mails'
import { membersWithRole } from './membersWithRole'
import { notify } from './notices'
import { appendRecord, type Actor } from './record'

type DeviationRow = typeof deviation.$inferSelect

export interface ReleasedVerdicts {
  readonly studyId: StudyId
  readonly extractId: ExtractId
  readonly checkId: CheckId
  /** Planned analyses whose verdicts are released by this. */
  readonly analyses: readonly string[]
  readonly actor: Actor
}

const DAY = 24 * 60 * 60 * 1000

/** Investigators whom the plan names: one by e-mail address, else whoever holds the role. */
export async function namedInvestigators(db: Queryable, studyId: StudyId, email: string | null) {
  const found = await membersWithRole(db, studyId, 'investigator')
  return email === null ? found : found.filter(candidate => candidate.email === email.toLowerCase())
}

async function nextNumber(tx: Transaction, studyId: StudyId): Promise<number> {
  const [row] = await tx.select({ last: max(deviation.number) }).from(deviation).where(eq(deviation.studyId, studyId))
  return (row?.last ?? 0) + 1
}

interface Telling extends ReleasedVerdicts { readonly check: JudgedCheck }

async function openDeviation(tx: Transaction, { studyId, check, actor }: Telling, analysis: string): Promise<DeviationRow> {
  const { days, email } = check.plan.document.acknowledger
  const row = onlyRow(await tx.insert(deviation).values({
    id: newId<DeviationId>(), studyId, number: await nextNumber(tx, studyId), analysis, planId: check.plan.id, dueAt: new Date(Date.now() + days * DAY),
  }).returning())
  const investigators = await namedInvestigators(tx, studyId, email)
  for (const { id } of investigators) await enqueueMail(tx, { kind: 'deviation-opened', to: id, studyId, deviationId: row.id })
  await appendRecord(tx, {
    chain: { studyId }, actor, action: 'deviation.opened', subject: row.id,
    detail: { number: row.number, analysis, investigatorsTold: investigators.length, dueAt: row.dueAt.toISOString() },
  })
  return row
}

async function newestVerdict(tx: Transaction, { id }: DeviationRow, extractId: ExtractId): Promise<ToldVerdict | null> {
  const [row] = await tx.select({ verdict: deviationEntry.verdict }).from(deviationEntry)
    .where(and(eq(deviationEntry.deviationId, id), eq(deviationEntry.extractId, extractId)))
    .orderBy(sql`${deviationEntry.releasedAt} desc`, sql`${deviationEntry.id} desc`).limit(1)
  return row ? row.verdict as ToldVerdict : null
}

const same = (a: ToldVerdict, b: ToldVerdict) => a.word === b.word && a.step === b.step && a.reason === b.reason && a.setAside === b.setAside

/**
 * Adds a verdict, and reopens what had been settled or put under observation. A further run over the same
 * extract that says the same adds nothing.
 */
async function extend(tx: Transaction, telling: Telling, row: DeviationRow, { verdict }: SeenAnalysis): Promise<void> {
  const { studyId, extractId, checkId, actor } = telling
  const before = await newestVerdict(tx, row, extractId)
  if (before !== null && same(before, verdict)) return
  await tx.insert(deviationEntry).values({ id: newId(), studyId, deviationId: row.id, extractId, checkId, verdict, releasedAt: sql`now()` })
  const reopened = row.state !== 'open'
  if (reopened) await tx.update(deviation).set({ state: 'open' }).where(eq(deviation.id, row.id))
  await appendRecord(tx, {
    chain: { studyId }, actor, action: 'deviation.extended', subject: row.id,
    detail: { number: row.number, extract: telling.check.extract.number, verdict: verdict.word, step: verdict.step, reopened },
  })
  await notify(tx, { studyId, kind: 'deviation', id: row.id })
}

/**
 * Opens a deviation for every planned analysis whose released verdict is a fallback or no registered method,
 * and adds any later released verdict to one that exists. The investigator's mail leaves with the same
 * transaction. Call it once verdicts have become everybody's, never before.
 */
export async function deviationsAfterRelease(tx: Transaction, released: ReleasedVerdicts): Promise<void> {
  const { studyId, analyses, checkId } = released
  const [locked] = await tx.select({ id: study.id }).from(study).where(eq(study.id, studyId)).for('update')
  if (!locked) throw new DomainError('not-found')
  const { check, seen } = await blindAnalyses(tx, { studyId, checkId, released: new Set(analyses) })
  const telling: Telling = { ...released, check }
  for (const analysis of seen.filter(candidate => candidate.released && analyses.includes(candidate.analysis))) {
    const [existing] = await tx.select().from(deviation).where(and(eq(deviation.studyId, studyId), eq(deviation.analysis, analysis.analysis)))
    if (!existing && !opensDeviation(analysis.verdict.word)) continue
    const row = existing ?? await openDeviation(tx, telling, analysis.analysis)
    await extend(tx, telling, row, analysis)
  }
}
