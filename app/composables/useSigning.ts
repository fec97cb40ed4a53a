import type { AnswerOf, Operation } from '#shared/contract/operation'
import type { ApiProblem } from '~/utils/apiProblem'

/**
 * One signing dialog: open or not, busy or not, and the problem that came back. `done` runs after the server
 * has accepted the signature.
 */
export function useSigning<O extends Operation>(operation: O, done: (answer: AnswerOf<O>) => unknown) {
  const call = useApi(operation)
  const isOpen = ref(false)
  const busy = ref(false)
  const problem = ref<ApiProblem | null>(null)

  async function sign(request: Parameters<typeof call>[0]) {
    busy.value = true
    problem.value = null
    try {
      const answer = await call(request)
      isOpen.value = false
      await done(answer)
    }
    catch (failure) {
      problem.value = asApiProblem(failure)
    }
    finally {
      busy.value = false
    }
  }

  function open() {
    problem.value = null
    isOpen.value = true
  }

  function close() {
    isOpen.value = false
  }

  const dialog = computed(() => ({ open: isOpen.value, busy: busy.value, problem: problem.value }))
  return { dialog, open, close, sign }
}
