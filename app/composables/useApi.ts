import type { AnswerOf, BodyInputOf, Operation, ParamsInputOf, QueryInputOf } from '#shared/contract/operation'

type Given<Key extends string, Value> = [Value] extends [undefined] ? { [K in Key]?: undefined } : { [K in Key]: Value }

/** What one call of an operation takes. */
export type Call<O extends Operation> = Given<'params', ParamsInputOf<O>> & Given<'body', BodyInputOf<O>> & { query?: Partial<QueryInputOf<O>> } & { ifMatch?: number }

/**
 * Calls one operation of the contract; on the server it carries the visitor's cookie along. A refusal is thrown
 * as `ApiProblem`.
 */
export function useApi<O extends Operation>(operation: O): (call: Call<O>) => Promise<AnswerOf<O>> {
  const request = useRequestFetch()

  return async ({ params, query, body, ifMatch }) => {
    try {
      return await request<unknown, string>(operationPath(operation, params), {
        method: operation.method,
        retry: false, // a refusal stays one, and some readings are recorded each time
        query: query as Record<string, unknown> | undefined,
        body: body as Record<string, unknown> | undefined,
        headers: ifMatch === undefined ? undefined : { 'if-match': `"${ifMatch}"` },
      }) as AnswerOf<O>
    }
    catch (failure) {
      throw asApiProblem(failure)
    }
  }
}

/** Reads an operation for a page: once on the server, again when asked. The page answers with the status of a refusal. */
export function useApiData<O extends Operation>(operation: O, call: Call<O>) {
  const read = useApi(operation)
  const event = useRequestEvent()

  return useAsyncData<AnswerOf<O>, ApiProblem>(`${operation.id} ${JSON.stringify(call)}`, async () => {
    try {
      return await read(call)
    }
    catch (failure) {
      const problem = asApiProblem(failure)
      if (event) setResponseStatus(event, problem.status || 503)
      throw problem
    }
  })
}
