/** Stands between the parts of a subject's id where two columns make it, as in `01-701/1015`. */
const BETWEEN = '/'

/** The id of a subject from one column or two, as extracts and allocation lists are joined by it. */
export const subjectKey = (parts: readonly string[]): string => parts.join(BETWEEN)
