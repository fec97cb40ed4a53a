import type { ProblemDetail } from '#shared/contract/problems'
import type { ApiProblem } from '~/utils/apiProblem'

const NAMESPACES = ['problems.detail', 'extract.findings', 'plan.issues'] as const

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
    const key = NAMESPACES.map(namespace => `${namespace}.${finding.code}`).find(candidate => te(candidate))
    const what = key ? t(key, wordedParams(finding.params)) : t('base.unworded', { code: finding.code })
    const place = placeOf(finding)
    return place ? t('base.placed', { place, what }) : what
  }

  return { sentence, detail }
}
