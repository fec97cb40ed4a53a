import { planHash } from '../plan/planHash'
import type { Plan } from '../plan/schema'
import { armsInExtract } from './arms'
import type { Allocation, ExtractColumns } from './columns'
import { ENGINE_VERSION } from './engineVersion'
import { indexExtract } from './extractIndex'
import { judgeAnalysis } from './judgeAnalysis'
import { pointsFor } from './plots'
import type { ExtractIdentity, Report } from './report'
import { type Resolutions, screenReport, screenRows } from './screen'
import { subjectsExpected } from './standing'

export interface JudgeInput {
  /** A plan without issues. */
  readonly plan: Plan
  readonly columns: ExtractColumns
  readonly extract: Omit<ExtractIdentity, 'rows'>
  /** The list of a blinded study; null while there is none, and in open-label studies, whose extract carries the arm. */
  readonly allocation: { readonly state: 'true' | 'dummy', readonly hash: string | null, readonly subjects: Allocation } | null
  readonly queries: Resolutions
}

function allocationOf({ plan, columns, allocation }: JudgeInput): { subjects: Allocation | null, report: Report['allocation'] } {
  if (plan.blinding === 'open-label') return { subjects: armsInExtract(columns), report: { state: 'not-needed', hash: null } }
  if (allocation === null) return { subjects: null, report: { state: 'none', hash: null } }
  return { subjects: allocation.subjects, report: { state: allocation.state, hash: allocation.hash } }
}

/**
 * Judges an extract by a plan: selects, screens, runs every planned analysis' rule. The same input gives the
 * same report, to the byte. Nobody may see it but through `release`.
 */
export function judge(input: JudgeInput): Report {
  const { plan, columns, extract, queries } = input
  const index = indexExtract(plan, columns)
  const hits = screenRows(plan, index).map(hit => ({ hit, report: screenReport(hit, columns, queries) }))
  const { subjects, report } = allocationOf(input)
  const context = {
    plan, index, hits,
    allocation: subjects,
    decisionPoint: extract.purpose === 'database-lock',
    subjectsExpected: subjectsExpected(plan, extract),
    points: pointsFor(plan.analyses.length * (plan.blinding === 'open-label' ? 1 : 2)),
  }
  return {
    format: 'stipule-report/1',
    engine: ENGINE_VERSION,
    plan: { hash: planHash(plan), protocol: { number: plan.protocol.number, version: plan.protocol.version } },
    extract: { ...extract, rows: columns.rows },
    allocation: report,
    screens: hits.map(each => each.report),
    analyses: plan.analyses.map(analysis => judgeAnalysis(context, analysis)),
  }
}
