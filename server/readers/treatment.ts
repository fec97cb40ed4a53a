import type { Arm } from '../../shared/plan/schema'

/**
 * Names of columns that tell or look like telling the treatment: ADaM (TRTP, TRT01A, TRTSEQP, TRxxPGy, TSEQAGy,
 * DOSE01P), SDTM (ARM, ACTARMCD, EXTRT) and plain words. Dates and durations of treatment (TRTSDT, TRTDURD),
 * the treatment-emergent flag and the reason for an absent arm (ARMNRS) stand in every blinded file and are none.
 */
const NAMES: readonly RegExp[] = [
  /^TRT(?:\d{1,2})?[PA](?:G\d+)?(?:N|C|CD|L)?$/,
  /^TRTSEQ[PA]?(?:G\d+)?(?:N|C|CD)?$/,
  /^TR\d{1,2}[PA]G\d+N?$/,
  /^TSEQ[PA](?:G\d+)?N?$/,
  /^(?:ACT|ACTUAL|PLAN|PLANNED|TREATMENT|TRT|RAND|RANDOMI[SZ]ED|ASSIGNED|STUDY)?ARM(?:CD|UD|N|NO|NUM|CODE|NAME|ID)?$/,
  /^(?:ACTUAL|PLANNED|ASSIGNED|RANDOMI[SZ]ED|RAND|STUDY|E[XC])?(?:TRT|TREAT|TREATMENT|DRUG)(?:CD|N|NO|NUM|CODE|NAME|ID|LABEL|GRP|GROUP|ASSIGNMENT|ASSIGNED|ALLOCATION|SEQUENCE)?$/,
  /^(?:TREATMENT|TRT|STUDY|RAND|RANDOMI[SZ]ATION|ALLOCATION)?(?:GROUP|GRP)(?:CD|N|NO|NUM|CODE|NAME|ID)?$/,
  /^(?:ALLOCATION|RANDOMI[SZ]ATION)(?:ARM|CODE|TREATMENT)?$/,
  /^DOSE(?:\d{1,2})?[PA]N?$/,
  /^E[XC]DOSE$/,
]

/** Whether a header reads like a treatment column; case, blanks and signs in it do not matter. */
export function looksLikeTreatment(header: string): boolean {
  const name = header.normalize('NFKC').toUpperCase().replace(/[^A-Z0-9]/g, '')
  return NAMES.some(pattern => pattern.test(name))
}

const plainText = (text: string): string => text.normalize('NFKC').trim().toUpperCase()

/**
 * Whether the cells of a column name arms of the plan and nothing else, whatever the column is called: at least
 * two different arms, by code or label. Codes of a single character are too common to tell.
 */
function namesArms(cells: readonly string[], arms: readonly Arm[]): boolean {
  const names = new Map(arms.flatMap(({ id, label }) => [id, label]
    .filter(text => text.length > 1).map(text => [plainText(text), id] as const)))
  const filled = cells.map(plainText).filter(text => text !== '')
  const met = new Set(filled.map(text => names.get(text)))
  return met.size > 1 && !met.has(undefined)
}

/**
 * The first column of a file that looks like treatment, by its name or by what stands in its first rows.
 *
 * @param rows some rows as read; an empty list looks at names only.
 * @returns the column's name, or null. Never a value.
 */
export function findTreatmentColumn(header: readonly string[], rows: readonly (readonly string[])[], arms: readonly Arm[]): string | null {
  const index = header.findIndex((name, at) => looksLikeTreatment(name) || namesArms(rows.map(row => row[at] ?? ''), arms))
  return header[index] ?? null
}
