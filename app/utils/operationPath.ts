import type { Operation } from '#shared/contract/operation'

/** The address of an operation with its path parameters filled in. */
export const operationPath = (operation: Operation, params: object | undefined): string => {
  const values = new Map(Object.entries(params ?? {}))
  return operation.path.replace(/\[(\w+)\]/g, (_match, name: string) => encodeURIComponent(String(values.get(name) ?? '')))
}
