import { z } from 'zod'
import { identifier, line, unique } from './parts'
import { prerequisiteSchema, requirementSchema } from './prerequisiteSchema'
import { FALLBACK_METHODS, PLANNED_METHODS, SUMMARY_MEASURES } from './terms'

/**
 * What is compared. `arms`: independent groups; `occasions`: the second visit minus the first within subject;
 * `constant`: one value per subject against a registered constant.
 */
const comparison = z.discriminatedUnion('kind', [
  z.strictObject({
    kind: z.literal('arms'),
    arms: z.array(identifier).min(2).max(12),
    contrast: z.enum(['one', 'global', 'all-pairs', 'all-against-control']),
    /** The arm all others are set against; null unless the contrast names one. */
    control: identifier.nullable(),
    adjustment: z.enum(['none', 'bonferroni', 'holm', 'tukey', 'dunnett']),
    visit: line,
  }),
  z.strictObject({ kind: z.literal('occasions'), first: line, second: line }),
  z.strictObject({ kind: z.literal('constant'), visit: line }),
])

const trigger = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('exactly'), of: z.array(identifier).min(1) }),
  z.strictObject({ kind: z.literal('at-least'), of: z.array(identifier).min(1) }),
  z.strictObject({ kind: z.literal('any') }),
])

/** Acts before the derivation (a change of logs); the log of a change is refused. */
const transformation = z.strictObject({
  kind: z.literal('log'),
  base: z.enum(['e', '2', '10']),
  shift: z.number().min(0),
  acts: z.literal('before-derivation'),
  /** Where the choice comes from: an earlier trial, the assay, the literature. */
  source: line,
})

export const fallbackSchema = z.strictObject({
  id: identifier,
  method: z.enum(FALLBACK_METHODS),
  transformation: transformation.nullable(),
  summaryMeasure: z.enum(SUMMARY_MEASURES),
  trigger,
  /** Each must be met; they carry no consequence of their own. */
  prerequisites: unique(z.array(requirementSchema).max(12)),
})

export const analysisSchema = z.strictObject({
  id: identifier,
  label: line,
  importance: z.enum(['primary', 'key-secondary', 'other']),
  estimand: line.nullable(),
  endpoint: identifier,
  analysisSet: identifier,
  /** Rows that count, e.g. ANL01FL = Y; null when every row of the set does. */
  recordSelection: z.strictObject({ column: identifier, value: line }).nullable(),
  comparison,
  method: z.enum(PLANNED_METHODS),
  summaryMeasure: z.enum(SUMMARY_MEASURES),
  nullValue: z.number(),
  direction: z.enum(['two-sided', 'greater', 'less']),
  alpha: z.number().gt(0).lt(0.5),
  prerequisites: unique(z.array(prerequisiteSchema).max(20)),
  fallbacks: unique(z.array(fallbackSchema).max(12)),
  /** What `not assessable` leads to at the decision point: a step from which the walk goes on, or null for no registered method. */
  notAssessableLeadsTo: identifier.nullable(),
})

export type PlannedAnalysis = z.infer<typeof analysisSchema>
export type Comparison = PlannedAnalysis['comparison']
export type Fallback = z.infer<typeof fallbackSchema>
export type Trigger = Fallback['trigger']
export type Transformation = NonNullable<Fallback['transformation']>
