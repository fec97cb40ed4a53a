/** A deep copy without reactivity and without `undefined`, as a document is sent. */
export const toPlain = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T
