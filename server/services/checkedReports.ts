import { and, asc, desc, eq, inArray } from 'drizzle-orm'
import type { Report } from '../../shared/decision/report'
import type { ReleaseState } from '../../shared/blinding/release'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { check, release } from '../database/schema/check'
import { extract } from '../database/schema/extract'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { signedPlans, type SignedPlan } from './plans'

type ReleaseRow = typeof release.$inferSelect
export type ExtractRow = typeof extract.$inferSelect
type CheckRow = typeof check.$inferSelect

/** The newest run over one extract. The report in it leaves through `releases.ts` alone. */
export interface CheckedReport {
  readonly extract: ExtractRow
  readonly plan: SignedPlan
  readonly check: Omit<CheckRow, 'reportBytes'>
  readonly report: Report
  /** Releases of this run, oldest first. */
  readonly releases: readonly ReleaseRow[]
  readonly blindBroken: boolean
}

export const readReport = (bytes: Uint8Array): Report => JSON.parse(Buffer.from(bytes).toString('utf8')) as Report

/** The newest run over each extract of a study, or over one of them, by extract. */
export async function newestChecks(db: Queryable, { studyId, extractId }: { studyId: StudyId, extractId?: ExtractId }): Promise<Map<ExtractId, CheckedReport>> {
  const rows = await db.selectDistinctOn([check.extractId], { check, extract, blindBrokenAt: study.blindBrokenAt }).from(check)
    .innerJoin(extract, and(eq(extract.studyId, check.studyId), eq(extract.id, check.extractId)))
    .innerJoin(study, eq(study.id, check.studyId))
    .where(and(eq(check.studyId, studyId), ...extractId ? [eq(check.extractId, extractId)] : []))
    .orderBy(check.extractId, desc(check.run))
  if (rows.length === 0) return new Map()
  const plans = await signedPlans(db, studyId)
  const releases = await db.select().from(release)
    .where(and(eq(release.studyId, studyId), inArray(release.checkId, rows.map(row => row.check.id))))
    .orderBy(asc(release.releasedAt), asc(release.id))
  return new Map(rows.map((row): [ExtractId, CheckedReport] => {
    const { reportBytes, ...facts } = row.check
    const plan = plans.get(facts.planId)
    if (!plan) throw new DomainError('internal')
    return [row.extract.id, {
      extract: row.extract, plan, check: facts, report: readReport(reportBytes),
      releases: releases.filter(({ checkId }) => checkId === facts.id), blindBroken: row.blindBrokenAt !== null,
    }]
  }))
}

/** @throws {DomainError} `not-found`, or `wrong-state` while there is no report of the extract yet. */
export async function newestCheck(db: Queryable, { studyId, extractId }: { studyId: StudyId, extractId: ExtractId }): Promise<CheckedReport> {
  const found = (await newestChecks(db, { studyId, extractId })).get(extractId)
  if (found) return found
  const [row] = await db.select({ id: extract.id }).from(extract).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId)))
  throw new DomainError(row ? 'wrong-state' : 'not-found')
}

/** Analyses whose arm-dependent verdict a cleared member signed away, at this run. */
export const signedAnalyses = ({ releases }: CheckedReport): ReadonlySet<string> =>
  new Set(releases.filter(({ signatureId }) => signatureId !== null).flatMap(({ analyses }) => analyses))

/** What the gate of the blind needs to know of a run. */
export function releaseStateOf({ extract: { state }, plan: { document }, blindBroken }: CheckedReport, released: ReadonlySet<string>): ReleaseState {
  return {
    openLabel: document.blinding === 'open-label',
    blindBroken,
    released,
    namesFailed: document.release.namesFailed,
    registeredInLedger: state !== 'withdrawn',
  }
}
