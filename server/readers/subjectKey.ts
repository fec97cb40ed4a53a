/** Stands between the parts of a subject's id where two columns make it; never inside a cell that was accepted. */
const BETWEEN = ' / '

/** The id of a subject from one column or two, as extracts and allocation lists are joined by it. */
export const subjectKey = (parts: readonly string[]): string => parts.join(BETWEEN)
