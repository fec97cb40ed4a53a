import type { AnswerOf, GivenBody, GivenParams, GivenQuery, Operation } from '#shared/contract/operation'

type Given<Key extends string, Value> = [Value] extends [undefined] ? { [K in Key]?: undefined } : { [K in Key]: Value }

/** What one call of an operation takes. */
export type Call<O extends Operation> = Given<'params', GivenParams<O>> & Given<'body', GivenBody<O>> & { query?: Partial<GivenQuery<O>> } & { ifMatch?: number }

const pathOf = (operation: Operation, params: object | undefined) => {
  const values = params as Record<string, unknown> | undefined
  return operation.path.replace(/\[(\w+)\]/g, (_match, name: string) => encodeURIComponent(String(values?.[name] ?? '')))
}

/**
 * Calls one operation of the contract; on the server it carries the visitor's cookie along. A refusal is thrown
 * as `ApiProblem`.
 */
export function useApi<O extends Operation>(operation: O): (call: Call<O>) => Promise<AnswerOf<O>> {
  const request = useRequestFetch()

  return async ({ params, query, body, ifMatch }) => {
    try {
      return await request<unknown, string>(pathOf(operation, params as object | undefined), {
        method: operation.method,
        query: query as Record<string, unknown> | undefined,
        body: body as Record<string, unknown> | undefined,
        headers: ifMatch === undefined ? undefined : { 'If-Match': `"${ifMatch}"` },
      }) as AnswerOf<O>
    }
    catch (failure) {
      throw asApiProblem(failure)
    }
  }
}

/** Reads an operation for a page: once on the server, again when asked. */
export function useApiData<O extends Operation>(operation: O, call: Call<O>) {
  const read = useApi(operation)
  return useAsyncData<AnswerOf<O>, ApiProblem>(`${operation.id} ${JSON.stringify(call)}`, () => read(call))
}
