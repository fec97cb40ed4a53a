import { readDate } from './dates'
import { quoted, type FindingList } from './findings'

/** The analysis date of ADaM. */
const NAME = 'ADT'

/**
 * Looks at the dates of a file that has them. They decide nothing here, but a day that does not exist, or one
 * after the cut-off, says that the file is not what it seems. Other notations are left alone.
 */
export class DateColumn {
  readonly #index: number
  readonly #name: string | null
  readonly #cutOff: string | null

  /** @param cutOff calendar date up to which data should be in the file, or null when it is not known. */
  constructor(header: readonly string[], cutOff: string | null) {
    this.#index = header.findIndex(name => name.toUpperCase() === NAME)
    this.#name = header[this.#index] ?? null
    this.#cutOff = cutOff
  }

  check(row: number, cells: readonly string[], findings: FindingList): void {
    if (this.#name === null) return
    const place = { row, column: this.#name }
    const cell = cells[this.#index] ?? ''
    const reading = readDate(cell)
    if (reading.kind === 'impossible') findings.add('refuse', 'date-impossible', place, { text: quoted(cell) })
    // A partial date is compared as far as it goes: 2026-03 is not after 2026-03-15.
    if (reading.kind === 'date' && this.#cutOff !== null && reading.text > this.#cutOff.slice(0, reading.text.length)) {
      findings.add('warn', 'after-cut-off', place, { date: reading.text, cutOff: this.#cutOff })
    }
  }
}
