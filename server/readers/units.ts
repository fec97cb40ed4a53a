const IN_BRACKETS = /\(([^()]+)\)\s*$/

/** The unit at the end of a parameter's text, as in `Alanine Aminotransferase (U/L)`; null when there is none. */
export const unitInText = (text: string): string | null => IN_BRACKETS.exec(text)?.[1]?.trim() ?? null

/** One spelling of signs that look alike (micro sign and mu); case is kept, because it carries meaning. */
const spelled = (unit: string): string => unit.normalize('NFKC').trim()

/** Whether a cell states the registered unit, alone or in brackets at the end of a text. */
export function statesUnit(cell: string, registered: string): boolean {
  const unit = spelled(registered)
  return spelled(cell) === unit || spelled(unitInText(cell) ?? '') === unit
}
