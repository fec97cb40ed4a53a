import type { FindingList } from './findings'
import { quoted } from './findings'

interface Seen { readonly id: string, readonly row: number }

const withoutLeadingZeros = (id: string): string => id.replace(/(^|\D)0+(?=\d)/g, '$1')
const withoutCase = (id: string): string => id.toUpperCase().replace(/\s+/g, '')

/**
 * Notes ids that are probably one subject in two spellings: other case or blanks, or leading zeros that a
 * spreadsheet has dropped. Warns only; nothing is merged.
 */
export class IdSpelling {
  readonly #seen = new Set<string>()
  readonly #byCase = new Map<string, Seen>()
  readonly #byNumber = new Map<string, Seen>()
  #padded: { readonly width: number, readonly row: number } | null = null
  readonly #short: Seen[] = []

  /** How many different ids were met. */
  get size(): number {
    return this.#seen.size
  }

  add(id: string, row: number, column: string | null, findings: FindingList): void {
    if (this.#seen.has(id)) return
    this.#seen.add(id)
    const same = this.#note(this.#byCase, withoutCase(id), { id, row })
    if (same) findings.add('warn', 'id-case-or-blanks', { row, column }, { id: quoted(id), other: quoted(same.id), first: same.row })
    const zeros = same ? null : this.#note(this.#byNumber, withoutLeadingZeros(withoutCase(id)), { id, row })
    if (zeros) findings.add('warn', 'id-leading-zeros', { row, column }, { id: quoted(id), other: quoted(zeros.id), first: zeros.row })
    if (/^\d+$/.test(id)) this.#noteWidth({ id, row })
  }

  /** After the last row: numeric ids that are shorter than those with leading zeros. */
  finish(column: string | null, findings: FindingList): void {
    const padded = this.#padded
    if (padded === null) return
    for (const { id, row } of this.#short.filter(({ id }) => id.length < padded.width)) {
      findings.add('warn', 'id-shorter', { row, column }, { id: quoted(id), width: padded.width, first: padded.row })
    }
  }

  #note(spellings: Map<string, Seen>, key: string, seen: Seen): Seen | null {
    const earlier = spellings.get(key)
    if (!earlier) spellings.set(key, seen)
    return earlier ?? null
  }

  #noteWidth(seen: Seen): void {
    if (seen.id.startsWith('0')) this.#padded ??= { width: seen.id.length, row: seen.row }
    else this.#short.push(seen)
  }
}
