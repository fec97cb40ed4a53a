const CONTROL = /\p{Cc}/u
/** What a spreadsheet would run as a formula: `=`, `@`, or a sign in front of anything but a number. */
const FORMULA = /^\s*(?:[=@]|[+-](?![\d.,\s]|$))/

/** As it is judged: without blanks around it, in Unicode form NFC. */
const cellText = (cell: string): string => cell.trim().normalize('NFC')

const hasControlCharacter = (cell: string): boolean => CONTROL.test(cell)

const looksLikeFormula = (cell: string): boolean => FORMULA.test(cell)

/** Blanks around an id, doubled inside it, or of another kind than the plain one. */
const hasOddBlanks = (cell: string): boolean => cell !== cell.trim() || /\s{2,}|[^\S ]/u.test(cell)

/** A cell of text with what is to be said about it. */
export interface TextCell { readonly text: string, readonly control: boolean, readonly formula: boolean, readonly oddBlanks: boolean }

/**
 * Reads each distinct cell once: a million cells of ten words are ten strings and ten examinations.
 */
export class TextCells {
  readonly #known = new Map<string, TextCell>()

  of(cell: string): TextCell {
    const known = this.#known.get(cell)
    if (known !== undefined) return known
    const read = { text: cellText(cell), control: hasControlCharacter(cell), formula: looksLikeFormula(cell), oddBlanks: hasOddBlanks(cell) }
    this.#known.set(cell, read)
    return read
  }
}
