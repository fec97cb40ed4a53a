import { and, desc, eq, isNotNull, max } from 'drizzle-orm'
import type { Report } from '../../shared/decision/report'
import { canonicalText } from '../../shared/record/canonical'
import type { CheckId, DataQueryId, ExtractId, ReleaseId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { check, release } from '../database/schema/check'
import { dataQuery, extract } from '../database/schema/extract'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import type { JudgeResult, JudgeTask, RunJudge } from '../workers/judge'
import { sealedList } from './allocationLists'
import { loadInputs, sameInputs, type CheckInputs } from './checkInputs'
import { readReport } from './checkedReports'
import { deviationsAfterRelease } from './deviations'
import { readWholeBlob } from './blobs'
import { appendRecord, masked, SYSTEM } from './record'
import { mergeScreens } from './screenFindings'
import { notify } from './notices'

export interface CheckAddress { readonly studyId: StudyId, readonly extractId: ExtractId }

/** States in which a job over an extract has something to do. */
const JUDGED: readonly string[] = ['judging', 'checked']
const SCREENED: readonly string[] = [...JUDGED, 'awaiting-reason']

async function taskOf(db: Database, { extract: row, plan, allocation, queries }: CheckInputs): Promise<JudgeTask> {
  if (row.columnsBlobId === null || row.standing === null) throw new DomainError('wrong-state')
  const subjects = allocation === null ? null : await sealedList(db, allocation, plan.document, row.mapping?.subject ?? [])
  return {
    plan: plan.document,
    columns: await readWholeBlob(db, row.columnsBlobId),
    extract: { bytesHash: row.bytesHash, cutOff: row.cutOff, purpose: row.purpose, look: row.look, standing: row.standing },
    allocation: allocation === null || subjects === null ? null : { state: 'true', hash: allocation.hash, subjects },
    queries,
    verdicts: JUDGED.includes(row.state),
  }
}

/**
 * Judges an extract under the plan version that was in force when it was received, with the newest allocation
 * list and what was decided about its queries. Run again on the same inputs it changes nothing; when they
 * changed while it was judging it judges once more.
 *
 * @param judge does the arithmetic, on a thread where there are any.
 */
export async function runCheck(db: Database, address: CheckAddress, judge: RunJudge): Promise<void> {
  for (;;) {
    const inputs = await loadInputs(db, address)
    if (!SCREENED.includes(inputs.extract.state)) return
    const result = await judge(await taskOf(db, inputs))
    if (await db.transaction(tx => store(tx, address, inputs, result))) return
  }
}

async function lockExtract(tx: Transaction, { studyId, extractId }: CheckAddress): Promise<void> {
  await tx.select({ id: study.id }).from(study).where(eq(study.id, studyId)).for('update')
  await tx.select({ id: extract.id }).from(extract).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId))).for('update')
}

/** @returns false when what was judged is out of date. */
async function store(tx: Transaction, address: CheckAddress, inputs: CheckInputs, result: JudgeResult): Promise<boolean> {
  await lockExtract(tx, address)
  if (!sameInputs(inputs, await loadInputs(tx, address))) return false
  await storeScreens(tx, inputs, result)
  if (result.judged) await storeRun(tx, inputs, { contentHash: result.contentHash, ...result.judged })
  await notify(tx, { studyId: address.studyId, kind: 'check', id: address.extractId })
  return true
}

/** Findings of the screens and one data query for each that holds; once per extract. */
async function storeScreens(tx: Transaction, { extract: row }: CheckInputs, { contentHash, screens }: JudgeResult): Promise<void> {
  if (row.contentHash !== null) return
  const { findings, findingCounts } = mergeScreens(row, screens)
  await tx.update(extract).set({ contentHash, findings, findingCounts }).where(eq(extract.id, row.id))
  const [last] = await tx.select({ number: max(dataQuery.number) }).from(dataQuery).where(eq(dataQuery.studyId, row.studyId))
  const held = screens.filter(({ action }) => action === 'hold')
  for (const [index, { screen, endpoint, rows, count: touched }] of held.entries()) {
    const number = (last?.number ?? 0) + index + 1
    const { id } = onlyRow(await tx.insert(dataQuery)
      .values({ id: newId<DataQueryId>(), studyId: row.studyId, number, extractId: row.id, screen, endpoint, rows: [...rows], count: touched })
      .returning({ id: dataQuery.id }))
    await appendRecord(tx, {
      chain: { studyId: row.studyId }, actor: SYSTEM, action: 'query.opened', subject: id,
      detail: { number, extract: row.number, screen, endpoint, rows: touched },
    })
  }
}

interface Judged { readonly contentHash: string, readonly report: Report, readonly bytes: Uint8Array, readonly hash: string }

async function storeRun(tx: Transaction, { extract: row, plan, allocation }: CheckInputs, judged: Judged): Promise<void> {
  const at = { studyId: row.studyId, extractId: row.id }
  const [newest] = await tx.select().from(check).where(and(eq(check.studyId, row.studyId), eq(check.extractId, row.id))).orderBy(desc(check.run)).limit(1)
  const sameList = newest?.allocationId === (allocation?.id ?? null)
  if (newest && sameList && newest.reportHash === judged.hash) return
  const checkId = newId<CheckId>()
  const run = (newest?.run ?? 0) + 1
  await tx.insert(check).values({
    id: checkId, ...at, planId: plan.id, allocationId: allocation?.id ?? null, run, engine: judged.report.engine,
    reportBytes: judged.bytes, reportHash: judged.hash,
  })
  await tx.update(extract).set({ state: 'checked' }).where(eq(extract.id, row.id))
  await appendRecord(tx, {
    chain: { studyId: row.studyId }, actor: SYSTEM, action: 'extract.judged', subject: row.id,
    detail: {
      extract: row.number, run, planVersion: plan.version, engine: judged.report.engine, contentHash: judged.contentHash, reportHash: masked(judged.hash),
    },
  })
  await tellAtOnce(tx, { ...at, checkId }, judged.report, plan.document.blinding === 'open-label')
  if (newest && sameList) await carryOver(tx, newest, { report: judged.report, checkId })
}

type RunAddress = CheckAddress & { readonly checkId: CheckId }

/**
 * Arm-free and open-label verdicts are released as they are judged. An arm-free cause is told at once too, but
 * is no release: nothing that is formed with arms may be named beside it.
 */
async function tellAtOnce(tx: Transaction, at: RunAddress, { analyses }: Report, openLabel: boolean): Promise<void> {
  const open = analyses.filter(({ dependsOnArms }) => openLabel || !dependsOnArms).map(({ analysis }) => analysis)
  const caused = analyses.filter(({ armFreeVerdict }) => armFreeVerdict !== null).map(({ analysis }) => analysis)
  if (open.length > 0) await tx.insert(release).values({ id: newId<ReleaseId>(), ...at, analyses: open })
  await deviationsAfterRelease(tx, { ...at, analyses: [...new Set([...open, ...caused])], actor: SYSTEM })
}

/**
 * A run that differs from the one before it only where a query was decided keeps the signed releases of analyses
 * that came out the same to the last figure: whether they did depends on the query alone, never on arms.
 */
async function carryOver(tx: Transaction, before: typeof check.$inferSelect, now: { readonly report: Report, readonly checkId: CheckId }): Promise<void> {
  const former = new Map(readReport(before.reportBytes).analyses.map(analysis => [analysis.analysis, canonicalText(analysis)]))
  const unchanged = new Set(now.report.analyses.filter(analysis => former.get(analysis.analysis) === canonicalText(analysis)).map(({ analysis }) => analysis))
  const signed = await tx.select().from(release).where(and(eq(release.studyId, before.studyId), eq(release.checkId, before.id), isNotNull(release.signatureId)))
  for (const row of signed) {
    const analyses = row.analyses.filter(analysis => unchanged.has(analysis))
    if (analyses.length > 0) await tx.insert(release).values({ ...row, id: newId<ReleaseId>(), checkId: now.checkId, analyses })
  }
}
