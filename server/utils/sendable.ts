/** What a handler may return for an answer: moments as Date, lists as they are; both are serialised before the answer is checked. */
export type Sendable<T>
  = T extends string ? T | Date
    : T extends number | boolean | null | undefined ? T
      : T extends readonly (infer Element)[] ? readonly Sendable<Element>[]
        : T extends object ? { readonly [Key in keyof T]: Sendable<T[Key]> }
          : T
