import { and, eq } from 'drizzle-orm'
import { release as throughTheGate } from '../../shared/blinding/release'
import type { SeenReport } from '../../shared/decision/report'
import { canonicalBytes, sha256 } from '../../shared/record/canonical'
import type { ExtractId, ReleaseId } from '../../shared/schemas/domainIds'
import type { PersonId, StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { release } from '../database/schema/check'
import { settlement } from '../database/schema/deviation'
import { extract } from '../database/schema/extract'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { bindingExtract } from './binding'
import { isCurrent } from './checkInputs'
import { newestCheck, releaseStateOf, signedAnalyses, type CheckedReport } from './checkedReports'
import { deviationsAfterRelease } from './deviations'
import { recordExposure } from './exposures'
import { appendRecord } from './record'
import { requireSeparation } from './separation'
import { sign, signatureById, type Credentials } from './signatures'
import { notify } from './notices'
import { actorOf, type Viewer } from './viewer'

export interface ExtractAddress { readonly studyId: StudyId, readonly extractId: ExtractId }

export interface SeenCheck extends CheckedReport { readonly seen: SeenReport }

/** A run as everybody may see it: whoever asks, figures by arm are asked for separately. */
export const seenOf = (checked: CheckedReport): SeenCheck =>
  ({ ...checked, seen: throughTheGate(checked.report, { cleared: false }, releaseStateOf(checked, signedAnalyses(checked))) })

/** A run with figures by arm. Whoever receives it has had an arm-level view: record it. */
export const armsOf = (checked: CheckedReport): SeenCheck =>
  ({ ...checked, seen: throughTheGate(checked.report, { cleared: true }, releaseStateOf(checked, signedAnalyses(checked))) })

/**
 * The newest report of an extract as a member reads it. Every reading service takes reports from here or, for
 * several at once, from `seenOf`.
 *
 * @throws {DomainError} `not-found`, or `wrong-state` while there is no report yet.
 */
export const seenReport = async (db: Queryable, address: ExtractAddress): Promise<SeenCheck> => seenOf(await newestCheck(db, address))

/** Verdicts that wait behind the blind: formed with arms, decided by no arm-free cause, not signed away yet. */
function pendingAnalyses(checked: CheckedReport): string[] {
  const signed = signedAnalyses(checked)
  return checked.report.analyses
    .filter(({ analysis, dependsOnArms, armFreeVerdict }) => dependsOnArms && armFreeVerdict === null && !signed.has(analysis))
    .map(({ analysis }) => analysis)
}

/** The report as everybody will see it once released, and the hash that the releaser signs. */
function previewOf(checked: CheckedReport): { seen: SeenReport, hash: string } {
  const released = new Set([...signedAnalyses(checked), ...pendingAnalyses(checked)])
  const seen = throughTheGate(checked.report, { cleared: false }, { ...releaseStateOf(checked, released), blindBroken: false })
  return { seen, hash: sha256(canonicalBytes(seen)) }
}

export type ReleaseStanding = 'open' | 'released' | 'nothing-to-release' | 'not-yet'

/** Whether the plan lets the verdicts of this extract out now. */
async function policyAllows(db: Queryable, { extract: { id, studyId, standing, state }, plan: { document } }: CheckedReport): Promise<boolean> {
  if (state !== 'checked') return false
  if (standing === 'decision-point') return await bindingExtract(db, studyId) === id
  return standing === 'look' && document.release.armDependent === 'each-look'
}

/** Re-cuts, unscheduled and withdrawn extracts, and open-label studies, have nothing to release. */
function hasSomething(checked: CheckedReport): boolean {
  const { extract: { standing, state }, plan: { document } } = checked
  const registered = (standing === 'look' || standing === 'decision-point') && state !== 'withdrawn'
  return registered && document.blinding === 'blinded' && checked.report.analyses.some(({ dependsOnArms }) => dependsOnArms)
}

async function standingOfRelease(db: Queryable, checked: CheckedReport): Promise<ReleaseStanding> {
  if (!hasSomething(checked)) return 'nothing-to-release'
  if (pendingAnalyses(checked).length === 0) return signedAnalyses(checked).size > 0 ? 'released' : 'nothing-to-release'
  return await policyAllows(db, checked) && await isCurrent(db, checked) ? 'open' : 'not-yet'
}

async function releasedBy(db: Queryable, { releases }: CheckedReport) {
  const [newest] = releases.filter(({ signatureId }) => signatureId !== null).slice(-1)
  if (!newest || newest.signatureId === null) return null
  return { at: newest.releasedAt, signature: await signatureById(db, { studyId: newest.studyId, signatureId: newest.signatureId }) }
}

/**
 * What the others will see. It tells words that are still behind the blind, so reading it is an arm-level view.
 */
export function previewRelease(db: Database, { studyId, extractId, viewer }: ExtractAddress & { readonly viewer: Viewer }) {
  return db.transaction(async (tx) => {
    const checked = await newestCheck(tx, { studyId, extractId })
    const { seen, hash } = previewOf(checked)
    const state = await standingOfRelease(tx, checked)
    if (state !== 'nothing-to-release') await recordExposure(tx, { studyId, viewer, how: 'arm-level-view', subject: extractId })
    return { state, hash, report: seen, released: state === 'released' ? await releasedBy(tx, checked) : null }
  })
}

const REFUSALS: Readonly<Record<Exclude<ReleaseStanding, 'open'>, 'wrong-state' | 'already-done'>>
  = { 'released': 'already-done', 'nothing-to-release': 'wrong-state', 'not-yet': 'wrong-state' }

async function settlersIn(tx: Transaction, studyId: StudyId): Promise<PersonId[]> {
  const rows = await tx.select({ first: settlement.settledBy, second: settlement.secondBy }).from(settlement).where(eq(settlement.studyId, studyId))
  return rows.flatMap(({ first, second }) => second === null ? [first] : [first, second])
}

export interface SignRelease extends ExtractAddress, Credentials {
  /** Of the preview that was seen. */
  readonly hash: string
  readonly viewer: Viewer
}

/** Releases what was seen in the preview, exactly; deviations open with it. */
export async function signRelease(db: Database, { studyId, extractId, hash, viewer, identifier, password }: SignRelease) {
  return await db.transaction(async (tx) => {
    await tx.select({ id: study.id }).from(study).where(eq(study.id, studyId)).for('update')
    await tx.select({ id: extract.id }).from(extract).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId))).for('update')
    const checked = await newestCheck(tx, { studyId, extractId })
    const state = await standingOfRelease(tx, checked)
    if (state !== 'open') throw new DomainError(REFUSALS[state], [{ code: `release-${state}` }])
    if (previewOf(checked).hash !== hash) throw new DomainError('wrong-state', [{ pointer: '/hash', code: 'preview-changed' }])
    requireSeparation('release.sign', viewer.person.id, { 'deviation.settle': await settlersIn(tx, studyId) })
    const { id: signatureId } = await sign(tx, { studyId, viewer, identifier, password, meaning: 'released', subject: extractId, hash })
    return { releasedAt: await writeRelease(tx, checked, { signatureId, viewer }) }
  })
}

async function writeRelease(tx: Transaction, checked: CheckedReport, { signatureId, viewer }: { signatureId: string, viewer: Viewer }): Promise<Date> {
  const { extract: { studyId, id: extractId, number }, check: { id: checkId, run } } = checked
  const analyses = pendingAnalyses(checked)
  const row = onlyRow(await tx.insert(release).values({
    id: newId<ReleaseId>(), studyId, extractId, checkId, analyses, signatureId, releasedBy: viewer.person.id,
  }).returning())
  await recordExposure(tx, { studyId, viewer, how: 'arm-level-view', subject: extractId })
  await deviationsAfterRelease(tx, { studyId, extractId, checkId, analyses, actor: actorOf(viewer) })
  await appendRecord(tx, {
    chain: { studyId }, actor: actorOf(viewer), action: 'verdicts.released', subject: extractId,
    detail: { extract: number, run, analyses: analyses.join(' ') },
  })
  await notify(tx, { studyId, kind: 'release', id: extractId })
  return row.releasedAt
}
