import type { Allocation } from '../../shared/decision/columns'
import { contentHash } from '../../shared/decision/contentHash'
import { judge } from '../../shared/decision/judge'
import type { ExtractIdentity, Report } from '../../shared/decision/report'
import { screenExtract, type Resolutions, type ScreenFinding } from '../../shared/decision/screen'
import type { Plan } from '../../shared/plan/schema'
import { canonicalBytes, sha256 } from '../../shared/record/canonical'
import { decodeColumns } from '../readers/storedColumns'

/** What a thread needs to judge one extract: plain data, so that it can be handed over. */
export interface JudgeTask {
  readonly plan: Plan
  /** Stored form of the mapped columns. */
  readonly columns: Uint8Array
  readonly extract: Omit<ExtractIdentity, 'rows' | 'contentHash'>
  readonly allocation: { readonly state: 'true', readonly hash: string, readonly subjects: Allocation } | null
  readonly queries: Resolutions
  /** False: only what needs no verdict, for an extract whose reason is still awaited. */
  readonly verdicts: boolean
}

export interface JudgeResult {
  readonly contentHash: string
  readonly screens: readonly ScreenFinding[]
  readonly judged: { readonly report: Report, readonly bytes: Uint8Array, readonly hash: string } | null
}

export type RunJudge = (task: JudgeTask) => Promise<JudgeResult>

function withBytes(report: Report): NonNullable<JudgeResult['judged']> {
  const bytes = canonicalBytes(report)
  return { report, bytes, hash: sha256(bytes) }
}

/** Runs on a thread: screens, content hash and, when asked, the report with its canonical bytes. */
export default function judgeExtract({ plan, columns: stored, extract, allocation, queries, verdicts }: JudgeTask): JudgeResult {
  const columns = decodeColumns(stored)
  const hash = contentHash(columns)
  return {
    contentHash: hash,
    screens: screenExtract(plan, columns),
    judged: verdicts ? withBytes(judge({ plan, columns, extract: { ...extract, contentHash: hash }, allocation, queries })) : null,
  }
}
