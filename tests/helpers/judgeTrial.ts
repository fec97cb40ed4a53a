import type { ExtractColumns } from '#shared/decision/columns'
import { judge, type JudgeInput } from '#shared/decision/judge'
import type { Report } from '#shared/decision/report'
import type { Row, Trial } from './randomTrial'

/** Rows as the readers would map them; open-label extracts carry the arm. */
export function columnsOf(rows: readonly Row[], arms: Trial['allocation']): ExtractColumns {
  return {
    rows: rows.length,
    sourceRow: rows.map((_, index) => index + 2),
    subject: rows.map(({ subject }) => subject),
    parameter: rows.map(() => 'Y'),
    visit: rows.map(({ visit }) => visit),
    value: Float64Array.from(rows, ({ value }) => value),
    baseline: Float64Array.from(rows, ({ baseline }) => baseline),
    unit: rows.map(() => 'u'),
    site: null,
    imputed: null,
    arm: arms === null ? null : rows.map(({ subject }) => arms[subject] ?? ''),
    flags: { FASFL: rows.map(({ inSet }) => (inSet ? 'Y' : 'N')), ANL01FL: rows.map(({ flagged }) => (flagged ? 'Y' : '')) },
  }
}

export const IDENTITY = { bytesHash: '00'.repeat(32), contentHash: '11'.repeat(32), cutOff: '2026-01-10', look: null, standing: 'outside-ledger' } as const

/** Judges a trial; a second allocation may be given in place of its own. */
export function judgeTrial(trial: Trial, allocation: Trial['allocation'] = trial.allocation, extract: Partial<JudgeInput['extract']> = {}): Report {
  const open = trial.plan.blinding === 'open-label'
  return judge({
    plan: trial.plan,
    columns: columnsOf(trial.rows, open ? allocation : null),
    extract: { ...IDENTITY, purpose: trial.purpose, ...extract },
    allocation: open || allocation === null ? null : { state: 'true', hash: 'aa'.repeat(32), subjects: allocation },
    queries: {},
  })
}
