import { and, eq } from 'drizzle-orm'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database, Queryable } from '../database/client'
import { deviation } from '../database/schema/deviation'
import { DomainError } from '../domainError'
import { bindingExtract } from './binding'
import { newestCheck, type CheckedReport } from './checkedReports'
import { recordExposure } from './exposures'
import { extractTitle } from './extractTitles'
import { appendRecord } from './record'
import { armsOf, seenReport, type SeenCheck } from './releases'
import { actorOf, type Viewer } from './viewer'

export interface VerdictAddress {
  readonly studyId: StudyId
  readonly extractId: ExtractId
  /** Id of the planned analysis. */
  readonly analysis: string
}

const labelsOf = (list: readonly { readonly id: string, readonly label: string }[]): Record<string, string> =>
  Object.fromEntries(list.map(({ id, label }) => [id, label]))

/** Since when everybody may know a verdict: when it was released, or judged where nothing had to be released. */
function releasedAtOf({ releases, check: { createdAt } }: CheckedReport, analysis: string, released: boolean): Date | null {
  if (!released) return null
  return releases.find(({ analyses }) => analyses.includes(analysis))?.releasedAt ?? createdAt
}

async function deviationOf(db: Queryable, studyId: StudyId, analysis: string) {
  const [found] = await db.select({ id: deviation.id, number: deviation.number }).from(deviation)
    .where(and(eq(deviation.studyId, studyId), eq(deviation.analysis, analysis)))
  return found ?? null
}

async function viewOf(db: Queryable, checked: SeenCheck, analysis: string) {
  const { extract: row, plan, seen: report } = checked
  const { document } = plan
  const registered = document.analyses.find(({ id }) => id === analysis)
  const seen = report.analyses.find(each => each.analysis === analysis)
  if (!registered || !seen || row.standing === null) throw new DomainError('not-found')
  const endpoint = document.endpoints.find(({ id }) => id === registered.endpoint)
  return {
    extract: {
      id: row.id, number: row.number, title: extractTitle(row, document), cutOff: row.cutOff, standing: row.standing,
      binding: await bindingExtract(db, row.studyId) === row.id,
    },
    planVersion: plan.version,
    planHash: plan.hash,
    analysis: registered,
    labels: {
      endpoint: endpoint?.label ?? registered.endpoint,
      unit: endpoint?.unit ?? '',
      arms: labelsOf(document.arms),
      set: labelsOf(document.analysisSets)[registered.analysisSet] ?? registered.analysisSet,
    },
    seen,
    releasedAt: releasedAtOf(checked, analysis, seen.released),
    engine: report.engine,
    deviation: await deviationOf(db, row.studyId, analysis),
  }
}

/** One verdict as everybody may see it. */
export async function readVerdict(db: Queryable, { studyId, extractId, analysis }: VerdictAddress) {
  return viewOf(db, await seenReport(db, { studyId, extractId }), analysis)
}

/** One verdict with figures by arm. Each reading enters the record and makes the reader exposed. */
export function readArms(db: Database, { studyId, extractId, analysis, viewer }: VerdictAddress & { readonly viewer: Viewer }) {
  return db.transaction(async (tx) => {
    const checked = await newestCheck(tx, { studyId, extractId })
    const view = await viewOf(tx, armsOf(checked), analysis)
    await recordExposure(tx, { studyId, viewer, how: 'arm-level-view', subject: extractId })
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'arms.viewed', subject: extractId,
      detail: { extract: checked.extract.number, run: checked.check.run, analysis },
    })
    return view
  })
}
