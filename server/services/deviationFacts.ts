import { and, asc, eq, inArray, isNotNull } from 'drizzle-orm'
import type { SeenAnalysis } from '../../shared/decision/report'
import type { CheckId, DeviationId } from '../../shared/schemas/domainIds'
import type { PersonId, StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { check, release } from '../database/schema/check'
import { acknowledgement, deviation, deviationEntry, settlement } from '../database/schema/deviation'
import { extract } from '../database/schema/extract'
import { plan } from '../database/schema/plan'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { bindingExtract } from './binding'
import { blindAnalyses, type JudgedCheck } from './blindReports'
import type { ToldVerdict } from './deviationRules'

export interface DeviationAddress { readonly studyId: StudyId, readonly deviationId: DeviationId }

/** A released verdict of a deviation with the extract and plan version it belongs to. */
interface EntryFacts {
  readonly entry: typeof deviationEntry.$inferSelect & { readonly verdict: ToldVerdict }
  readonly extract: typeof extract.$inferSelect
  readonly planVersion: number
}

/** Everything that stands about one deviation, read once. */
export interface DeviationFacts {
  readonly row: typeof deviation.$inferSelect
  readonly study: typeof study.$inferSelect
  /** Oldest first; never empty. */
  readonly entries: readonly EntryFacts[]
  readonly newest: EntryFacts
  /** The run behind the newest entry, and its analysis as everybody may see it. */
  readonly check: JudgedCheck
  readonly seen: SeenAnalysis
  readonly acknowledged: typeof acknowledgement.$inferSelect | null
  readonly settlements: readonly (typeof settlement.$inferSelect)[]
  readonly bindingExtract: string | null
}

async function entriesOf(db: Queryable, deviationId: DeviationId): Promise<EntryFacts[]> {
  const rows = await db.select({ entry: deviationEntry, extract, planVersion: plan.version }).from(deviationEntry)
    .innerJoin(extract, eq(extract.id, deviationEntry.extractId))
    .innerJoin(check, eq(check.id, deviationEntry.checkId))
    .innerJoin(plan, eq(plan.id, check.planId))
    .where(eq(deviationEntry.deviationId, deviationId))
    .orderBy(asc(deviationEntry.releasedAt), asc(deviationEntry.id))
  return rows.map(({ entry, ...rest }) => ({ ...rest, entry: { ...entry, verdict: entry.verdict as ToldVerdict } }))
}

/**
 * @param upTo a run: what came after it is left out, so that a memo says what its settlement rested on.
 * @throws {DomainError} `not-found`, also for a deviation of another study.
 */
export async function deviationFacts(db: Queryable, { studyId, deviationId }: DeviationAddress, upTo?: CheckId): Promise<DeviationFacts> {
  const [found] = await db.select({ row: deviation, study }).from(deviation).innerJoin(study, eq(study.id, deviation.studyId))
    .where(and(eq(deviation.studyId, studyId), eq(deviation.id, deviationId)))
  if (!found) throw new DomainError('not-found')
  const all = await entriesOf(db, deviationId)
  const entries = upTo === undefined ? all : all.slice(0, all.findIndex(({ entry }) => entry.checkId === upTo) + 1)
  const newest = entries[entries.length - 1]
  if (!newest) throw new DomainError('internal')
  const { check: judged, seen } = await blindAnalyses(db, { studyId, checkId: newest.entry.checkId })
  const analysis = seen.find(candidate => candidate.analysis === found.row.analysis)
  if (!analysis) throw new DomainError('internal')
  const [acknowledged] = await db.select().from(acknowledgement).where(eq(acknowledgement.deviationId, deviationId))
  const settlements = await db.select().from(settlement).where(eq(settlement.deviationId, deviationId)).orderBy(asc(settlement.at), asc(settlement.id))
  return {
    ...found, entries, newest, check: judged, seen: analysis, acknowledged: acknowledged ?? null, settlements,
    bindingExtract: await bindingExtract(db, studyId),
  }
}

/** Who uploaded the extracts of a deviation and who signed releases of them: neither may settle it. */
export async function handsIn(db: Queryable, { row, entries }: DeviationFacts): Promise<{ uploaders: PersonId[], releasers: PersonId[] }> {
  const extracts = [...new Set(entries.map(({ extract: { id } }) => id))]
  const signed = await db.select({ by: release.releasedBy }).from(release)
    .where(and(eq(release.studyId, row.studyId), inArray(release.extractId, extracts), isNotNull(release.signatureId)))
  return {
    uploaders: entries.map(({ extract: { uploadedBy } }) => uploadedBy),
    releasers: signed.flatMap(({ by }) => by === null ? [] : [by]),
  }
}
