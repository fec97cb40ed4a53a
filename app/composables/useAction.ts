import type { AnswerOf, Operation } from '#shared/contract/operation'
import type { ApiProblem } from '~/utils/apiProblem'

/** One call that a button makes: busy while it runs, the problem that came back, and what follows success. */
export function useAction<O extends Operation>(operation: O, done: (answer: AnswerOf<O>) => unknown) {
  const call = useApi(operation)
  const busy = ref(false)
  const problem = ref<ApiProblem | null>(null)

  async function run(request: Parameters<typeof call>[0]): Promise<boolean> {
    busy.value = true
    problem.value = null
    try {
      await done(await call(request))
      return true
    }
    catch (failure) {
      problem.value = asApiProblem(failure)
      return false
    }
    finally {
      busy.value = false
    }
  }

  return { run, busy, problem }
}
