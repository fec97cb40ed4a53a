import type { Finding } from '../../shared/contract/extracts'
import type { catalogue } from '../../shared/wording/catalogue'

type Severity = Finding['severity']
/** What can be found in a file; each has its words. */
export type FindingCode = keyof typeof catalogue['en']['extract']['findings']
type Params = Finding['params']

/** At most this many findings of a file are kept; all are counted. */
export const FINDINGS_KEPT = 500

/** Text of a cell as a finding quotes it: one short line. */
export const quoted = (text: string): string =>
  text.length > 40 ? `${text.slice(0, 39)}…` : text

export interface FindingSummary {
  readonly list: readonly Finding[]
  readonly counts: { readonly refuse: number, readonly hold: number, readonly warn: number }
}

/**
 * Findings of one file in the order in which they were met. When there are more than are kept, a finding that
 * weighs more takes the place of a warning, so that what refuses a file is always among those shown.
 */
export class FindingList {
  readonly #kept: Record<Severity, Finding[]> = { refuse: [], hold: [], warn: [] }
  readonly #counts = { refuse: 0, hold: 0, warn: 0 }

  add(severity: Severity, code: FindingCode, place: { row?: number | null, column?: string | null } = {}, params: Params = {}): void {
    this.#counts[severity] += 1
    const kept = this.#kept[severity]
    if (kept.length < FINDINGS_KEPT) kept.push({ severity, code, row: place.row ?? null, column: place.column ?? null, params })
  }

  get refused(): boolean {
    return this.#counts.refuse > 0
  }

  summary(): FindingSummary {
    const { refuse, hold, warn } = this.#kept
    return { list: [...refuse, ...hold, ...warn].slice(0, FINDINGS_KEPT), counts: { ...this.#counts } }
  }
}

/** The file cannot be read at all, from this place on. */
export class UnreadableFile extends Error {
  readonly finding: Finding

  constructor(code: FindingCode, place: { row?: number, column?: string } = {}, params: Params = {}) {
    super(code)
    this.name = 'UnreadableFile'
    this.finding = { severity: 'refuse', code, row: place.row ?? null, column: place.column ?? null, params }
  }
}
