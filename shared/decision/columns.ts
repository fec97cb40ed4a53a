/**
 * One extract as typed columns, after reading and mapping. All lists have `rows` members; texts are NFC and
 * without surrounding blanks, an empty text is a missing one.
 */
export interface ExtractColumns {
  readonly rows: number
  /** Where each row stands in the file; the header is row 1. */
  readonly sourceRow: Uint32Array | readonly number[]
  readonly subject: readonly string[]
  /** Null when the file carries no parameter: every row then belongs to the plan's only endpoint. */
  readonly parameter: readonly string[] | null
  /** Null when the file carries no visit: every row then belongs to the plan's only visit. */
  readonly visit: readonly string[] | null
  /** In the endpoint's unit; NaN where missing. */
  readonly value: Float64Array
  /** The subject's baseline on the row of the later value; NaN where missing. */
  readonly baseline: Float64Array | null
  /** Null when the file carries no unit: every value then counts as one without it. */
  readonly unit: readonly string[] | null
  readonly site: readonly string[] | null
  /** How a value was imputed (e.g. LOCF); empty for an observed one. */
  readonly imputed: readonly string[] | null
  /** Arm ids of the plan; null in blinded studies, whose extracts carry no arm. */
  readonly arm: readonly string[] | null
  /** By name of the file's column: each analysis set's and each record selection's. */
  readonly flags: Readonly<Record<string, readonly string[]>>
}

/** Subject to arm id, from the allocation list or, in an open-label study, from the extract. */
export type Allocation = Readonly<Record<string, string>>
