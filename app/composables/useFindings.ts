import { FormContextKey } from 'vee-validate'
import type { ApiProblem } from '~/utils/apiProblem'

/**
 * Puts a problem's findings about fields of the surrounding form at those fields, in words, and gives back the
 * words of the others.
 */
export function useFindings(problem: Ref<ApiProblem>) {
  const form = inject(FormContextKey, null)
  const { detail } = useProblemTexts()

  const placed = computed(() => problem.value.errors.map((finding) => {
    const path = finding.pointer === undefined ? '' : fieldPath(finding.pointer)
    const field = form?.getPathState(path) ? path : null
    return { field, text: detail(field === null ? finding : { ...finding, pointer: undefined }) }
  }))

  watch(problem, () => {
    const atFields = placed.value.flatMap(({ field, text }) => field === null ? [] : [[field, text] as const])
    if (atFields.length > 0) form?.setErrors(Object.fromEntries(atFields))
  }, { immediate: true })

  return computed(() => placed.value.filter(({ field }) => field === null).map(({ text }) => text))
}
