const CONTROL = /\p{Cc}/u
/** What a spreadsheet would run as a formula: `=`, `@`, or a sign in front of anything but a number. */
const FORMULA = /^\s*(?:[=@]|[+-](?![\d.,\s]|$))/

/** A text cell as it is judged: without blanks around it, in Unicode form NFC. */
export const cellText = (cell: string): string => cell.trim().normalize('NFC')

export const hasControlCharacter = (cell: string): boolean => CONTROL.test(cell)

export const looksLikeFormula = (cell: string): boolean => FORMULA.test(cell)

/** Blanks around an id, doubled inside it, or of another kind than the plain one. */
export const hasOddBlanks = (cell: string): boolean => cell !== cell.trim() || /\s{2,}|[^\S ]/u.test(cell)
