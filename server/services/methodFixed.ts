import { and, eq, inArray, isNotNull } from 'drizzle-orm'
import type { ProblemDetail } from '../../shared/contract/problems'
import type { Transaction } from '../database/client'
import { deviation, memo } from '../database/schema/deviation'
import { DomainError } from '../domainError'
import type { CheckedReport } from './checkedReports'
import { opensDeviation } from './deviationRules'
import { seenOf } from './releases'

/** Analyses whose deviation is settled under a signed memo that binds. */
async function settledAnalyses(tx: Transaction, { extract: { studyId } }: CheckedReport, analyses: readonly string[]): Promise<ReadonlySet<string>> {
  if (analyses.length === 0) return new Set()
  const rows = await tx.selectDistinct({ analysis: deviation.analysis }).from(deviation)
    .innerJoin(memo, and(eq(memo.studyId, deviation.studyId), eq(memo.deviationId, deviation.id)))
    .where(and(
      eq(deviation.studyId, studyId), eq(deviation.state, 'memo-signed'), inArray(deviation.analysis, [...analyses]),
      eq(memo.binding, true), isNotNull(memo.signatureId),
    ))
  return new Set(rows.map(({ analysis }) => analysis))
}

/**
 * Every binding verdict is released, and where it is not the planned method, settled with its memo signed.
 *
 * @throws {DomainError} `wrong-state`, naming each analysis that still stands in the way.
 */
export async function requireSettled(tx: Transaction, checked: CheckedReport): Promise<void> {
  const { seen } = seenOf(checked)
  const held = seen.analyses.filter(({ released }) => !released)
  const opening = seen.analyses.filter(({ released, verdict }) => released && opensDeviation(verdict.word))
  const settled = await settledAnalyses(tx, checked, opening.map(({ analysis }) => analysis))
  const open = opening.filter(({ analysis }) => !settled.has(analysis))
  const findings: ProblemDetail[] = [
    ...held.map(({ analysis }) => ({ code: 'verdict-not-released', params: { analysis } })),
    ...open.map(({ analysis }) => ({ code: 'deviation-not-settled', params: { analysis } })),
  ]
  if (findings.length > 0) throw new DomainError('wrong-state', findings)
}
