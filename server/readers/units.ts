import type { Plan } from '../../shared/plan/schema'

const IN_BRACKETS = /\(([^()]+)\)\s*$/

/** The unit at the end of a parameter's text, as in `Alanine Aminotransferase (U/L)`; null when there is none. */
export const unitInText = (text: string): string | null => IN_BRACKETS.exec(text)?.[1]?.trim() ?? null

/** One spelling of signs that look alike (micro sign and mu); case is kept, because it carries meaning. */
const spelled = (unit: string): string => unit.normalize('NFKC').trim()

/**
 * Reads a cell as a unit: alone, or in brackets at the end of a parameter's text. A unit that the plan registers
 * comes out as it is registered there; any other as it stands.
 */
export function unitReader(plan: Plan): (text: string) => string {
  const registered = new Map(plan.endpoints.map(({ unit }) => [spelled(unit), unit]))
  return (text) => {
    const inText = unitInText(text)
    return registered.get(spelled(text)) ?? registered.get(spelled(inText ?? '')) ?? inText ?? text
  }
}
