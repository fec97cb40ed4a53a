import type { ProblemDetail } from '#shared/contract/problems'
import type { ApiProblem } from '~/utils/apiProblem'

/** Problems in words: the sentence of the whole, and one line for each finding with its place. */
export function useProblemTexts() {
  const { t, te } = useI18n()

  const sentence = (problem: ApiProblem) => t(problem.code === 'unreachable' ? 'base.unreachable' : `problems.${problem.code}`)

  function placeOf({ row, column, pointer }: ProblemDetail): string | null {
    if (row !== undefined && column !== undefined) return t('base.rowColumn', { row, column })
    if (row !== undefined) return t('base.row', { row })
    return column ?? pointer ?? null
  }

  function detail(finding: ProblemDetail): string {
    const key = ['problems.detail', 'extract.findings', 'plan.issues'].map(lead => `${lead}.${finding.code}`).find(candidate => te(candidate))
    const what = key ? t(key, finding.params ?? {}) : finding.code
    const place = placeOf(finding)
    return place ? t('base.placed', { place, what }) : what
  }

  return { sentence, detail }
}
