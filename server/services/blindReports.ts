import { and, eq } from 'drizzle-orm'
import { release as releaseReport } from '../../shared/blinding/release'
import type { Report, SeenAnalysis } from '../../shared/decision/report'
import type { CheckId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { check, release } from '../database/schema/check'
import { extract } from '../database/schema/extract'
import { DomainError } from '../domainError'
import { readSignedPlan, type SignedPlan } from './plans'

/** A run of the judge with the plan version and the extract it was made from. */
export interface JudgedCheck {
  readonly id: CheckId
  readonly engine: string
  readonly plan: SignedPlan
  readonly extract: typeof extract.$inferSelect
}

export interface BlindAnalyses {
  readonly check: JudgedCheck
  /** As everybody may see them, whoever asks and whatever has been unblinded since. */
  readonly seen: readonly SeenAnalysis[]
}

/** Planned analyses of a check whose verdicts may be told to everybody. */
async function releasedAnalyses(db: Queryable, checkId: CheckId): Promise<ReadonlySet<string>> {
  const rows = await db.select({ analyses: release.analyses }).from(release).where(eq(release.checkId, checkId))
  return new Set(rows.flatMap(({ analyses }) => analyses))
}

export interface BlindReading {
  readonly studyId: StudyId
  readonly checkId: CheckId
  /** Taken as released; what the database says when left out. */
  readonly released?: ReadonlySet<string>
}

/**
 * The analyses of a check through the gate of the blind, for a reader who is not cleared. Deviations, mails and
 * blinded memos are made of this alone.
 */
export async function blindAnalyses(db: Queryable, { studyId, checkId, released }: BlindReading): Promise<BlindAnalyses> {
  const [row] = await db.select({ check, extract }).from(check)
    .innerJoin(extract, eq(extract.id, check.extractId))
    .where(and(eq(check.studyId, studyId), eq(check.id, checkId)))
  if (!row) throw new DomainError('not-found')
  const plan = await readSignedPlan(db, { studyId, planId: row.check.planId })
  const report = JSON.parse(Buffer.from(row.check.reportBytes).toString('utf8')) as Report
  const { analyses } = releaseReport(report, { cleared: false }, {
    openLabel: plan.document.blinding === 'open-label',
    blindBroken: false,
    released: released ?? await releasedAnalyses(db, checkId),
    namesFailed: plan.document.release.namesFailed,
    registeredInLedger: row.extract.state !== 'withdrawn',
  })
  return { check: { id: row.check.id, engine: row.check.engine, plan, extract: row.extract }, seen: analyses }
}
