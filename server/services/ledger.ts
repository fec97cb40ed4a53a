import { and, asc, eq, isNotNull } from 'drizzle-orm'
import type { PlannedAnalysis } from '../../shared/plan/analysisSchema'
import type { Plan } from '../../shared/plan/schema'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { deviation } from '../database/schema/deviation'
import { extract } from '../database/schema/extract'
import { bindingExtract } from './binding'
import { newestChecks, type CheckedReport, type ExtractRow } from './checkedReports'
import { extractTitle } from './extractTitles'
import { signedPlans, type SignedPlan } from './plans'
import { seenOf, type SeenCheck } from './releases'
import { stepLabel } from './stepLabels'

type DeviationRow = typeof deviation.$inferSelect
type Accepted = ExtractRow & { readonly standing: NonNullable<ExtractRow['standing']> }

const COLUMN_STATES = ['judging', 'checked', 'awaiting-reason', 'withdrawn'] as const
const columnState = (state: ExtractRow['state']) => COLUMN_STATES.find(known => known === state) ?? 'judging'

const isAccepted = (row: ExtractRow): row is Accepted => row.standing !== null

function columnOf(row: Accepted, plan: SignedPlan, binding: ExtractId | null) {
  return {
    extractId: row.id,
    number: row.number,
    title: extractTitle(row, plan.document),
    cutOff: row.cutOff,
    standing: row.standing,
    planVersion: plan.version,
    subjects: row.subjects,
    binding: row.id === binding,
    state: columnState(row.state),
  }
}

const labelIn = (list: readonly { readonly id: string, readonly label: string }[], id: string): string => list.find(each => each.id === id)?.label ?? id

/** What an analysis compares, in the plan's own words. */
function detailOf({ comparison, endpoint, prerequisites, fallbacks }: PlannedAnalysis, { endpoints, visits, arms }: Plan) {
  const at = comparison.kind === 'occasions' ? [comparison.first, comparison.second] : [comparison.visit]
  const compared = comparison.kind === 'arms' ? comparison.arms : []
  return {
    endpoint: labelIn(endpoints, endpoint),
    visits: at.map(id => labelIn(visits, id)),
    arms: compared.map(id => labelIn(arms, id)),
    allArms: comparison.kind === 'arms' && compared.length === arms.length,
    pretest: fallbacks.length > 0 || prerequisites.some(({ onFailure }) => onFailure === 'switch'),
  }
}

interface Registered { readonly analysis: PlannedAnalysis, readonly plan: Plan }

/** Analyses of the plan in force in its order, then those that only earlier versions registered. */
function registeredIn(newestFirst: readonly SignedPlan[]): Registered[] {
  const found = new Map<string, Registered>()
  for (const { document } of newestFirst) {
    for (const analysis of document.analyses) if (!found.has(analysis.id)) found.set(analysis.id, { analysis, plan: document })
  }
  return [...found.values()]
}

function cellOf(analysis: string, checked: SeenCheck | null) {
  const seen = checked?.seen.analyses.find(each => each.analysis === analysis)
  const registered = checked?.plan.document.analyses.find(({ id }) => id === analysis)
  if (!seen || !registered) return { verdict: null, stepLabel: null }
  return { verdict: seen.verdict, stepLabel: stepLabel(registered, seen.verdict) }
}

function rowOf({ analysis, plan }: Registered, columns: readonly (SeenCheck | null)[], deviations: readonly DeviationRow[]) {
  const opened = deviations.find(each => each.analysis === analysis.id)
  return {
    analysis: analysis.id,
    label: analysis.label,
    detail: detailOf(analysis, plan),
    method: analysis.method,
    importance: analysis.importance,
    cells: columns.map(checked => cellOf(analysis.id, checked)),
    deviation: opened ? { id: opened.id, number: opened.number, state: opened.state } : null,
  }
}

const seenIn = (checks: ReadonlyMap<ExtractId, CheckedReport>, id: ExtractId): SeenCheck | null => {
  const checked = checks.get(id)
  return checked ? seenOf(checked) : null
}

/** Planned analyses against extracts, as everybody may see them; the same for every member. */
export async function readLedger(db: Queryable, { studyId }: { studyId: StudyId }) {
  const plans = await signedPlans(db, studyId)
  const rows = await db.select().from(extract).where(and(eq(extract.studyId, studyId), isNotNull(extract.standing))).orderBy(asc(extract.cutOff), asc(extract.number))
  const checks = await newestChecks(db, { studyId })
  const deviations = await db.select().from(deviation).where(eq(deviation.studyId, studyId))
  const binding = await bindingExtract(db, studyId)
  const accepted = rows.filter(isAccepted).flatMap((row) => {
    const plan = plans.get(row.planId)
    return plan ? [{ row, plan }] : []
  })
  const newestFirst = [...plans.values()].sort((a, b) => b.version - a.version)
  const seen = accepted.map(({ row }) => seenIn(checks, row.id))
  return {
    planVersion: newestFirst[0]?.version ?? null,
    planSignedAt: newestFirst[0]?.signedAt ?? null,
    columns: accepted.map(({ row, plan }) => columnOf(row, plan, binding)),
    rows: registeredIn(newestFirst).map(registered => rowOf(registered, seen, deviations)),
  }
}
