import { ANDERSON_DARLING_LEAST } from './normality/andersonDarling'
import { SHAPIRO_WILK_RANGE } from './normality/shapiroWilk'

/** What documentation and forms may say about a procedure. */
export interface ProcedureEntry {
  /** File below shared/statistics, named by the standard term, without its ending. */
  readonly file: string
  /** Key of its name in the wording. */
  readonly nameKey: string
  /** Number of values (in each group, where there are groups) with which it is defined; null: no upper bound. */
  readonly least: number
  readonly most: number | null
  /** Key in docs/refs.bib. */
  readonly source: string
}

const entry = (file: string, nameKey: string, source: string, least: number, most: number | null = null): ProcedureEntry =>
  ({ file, nameKey, source, least, most })

/** Every procedure that judges; descriptive helpers have their section in docs/statistics.md alone. */
export const PROCEDURES = {
  'shapiro-wilk': entry('normality/shapiroWilk', 'plan.describe.procedures.shapiro-wilk', 'royston1995', SHAPIRO_WILK_RANGE.least, SHAPIRO_WILK_RANGE.most),
  'anderson-darling': entry('normality/andersonDarling', 'plan.describe.procedures.anderson-darling', 'stephens1986', ANDERSON_DARLING_LEAST),
  'skewness': entry('descriptive/skewness', 'verdict.measure.skewness', 'joanes1998', 3),
  'excess-kurtosis': entry('descriptive/excessKurtosis', 'verdict.measure.excess-kurtosis', 'joanes1998', 4),
  'brown-forsythe': entry('spread/brownForsythe', 'plan.describe.procedures.brown-forsythe', 'brown1974', 2),
  'sd-ratio': entry('spread/sdRatio', 'verdict.measure.sd-ratio', 'snedecor1989', 2),
  'not-positive': entry('descriptive/notPositive', 'verdict.measure.not-positive', 'boxcox1964', 1),
  'bonferroni': entry('multiplicity/bonferroni', 'plan.adjustments.bonferroni', 'dunn1961', 1),
  'holm': entry('multiplicity/holm', 'plan.adjustments.holm', 'holm1979', 1),
} as const satisfies Record<string, ProcedureEntry>

export type ProcedureId = keyof typeof PROCEDURES
