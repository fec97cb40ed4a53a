import { z } from 'zod'
import { identifier } from './parts'
import { CONSEQUENCES, QUANTITIES, READINGS } from './terms'

const level = z.number().gt(0).lt(0.5)

/** A reading of `not assessable` other than itself, which a plan may register for these two reasons only. */
const otherReading = z.strictObject({
  tooFewData: z.enum(['met', 'not-met']).nullable(),
  procedureUndefined: z.enum(['met', 'not-met']).nullable(),
})

/** The least number of values a judged sample must have. */
const minimum = z.number().int().min(3).max(5000)

const multiplicity = z.enum(['none', 'bonferroni', 'holm'])

/** A size of departure, a significance level, or both. */
const limits = <M extends string, P extends string>(measure: [M, ...M[]], procedures: [P, ...P[]]) => z.strictObject({
  size: z.strictObject({ measure: z.enum(measure), limit: z.number().positive(), reading: z.enum(READINGS) }).nullable(),
  significance: z.strictObject({ procedure: z.enum(procedures), level }).nullable(),
  /** With a size and a level: which of them must break. */
  broken: z.enum(['either', 'both']),
}).refine(({ size, significance }) => size !== null || significance !== null, { message: 'no-limit', path: ['size'] })

const normality = z.strictObject({
  id: identifier,
  kind: z.literal('normality'),
  quantity: z.enum(QUANTITIES),
  limits: limits(['skewness'], ['shapiro-wilk', 'anderson-darling']),
  minimum,
  multiplicity,
  otherReading,
})

const equalSpread = z.strictObject({
  id: identifier,
  kind: z.literal('equal-spread'),
  quantity: z.literal('values-within-arms'),
  limits: limits(['sd-ratio'], ['brown-forsythe']),
  minimum,
  otherReading,
})

const symmetry = z.strictObject({
  id: identifier,
  kind: z.literal('symmetry'),
  quantity: z.enum(['differences', 'values']),
  limits: z.strictObject({ size: z.strictObject({ measure: z.literal('skewness'), limit: z.number().positive(), reading: z.enum(READINGS) }) }),
  minimum,
  otherReading,
})

/** Every value that enters the analysis, before derivation, plus the transformation's shift, is above zero. */
const positiveValues = z.strictObject({ id: identifier, kind: z.literal('positive-values') })

/** Subjects with a usable value. `expected` is the look's expected number, by arm in proportion to the allocation ratio. */
const count = z.strictObject({
  id: identifier,
  kind: z.literal('count'),
  scope: z.enum(['per-arm', 'in-all']),
  least: z.discriminatedUnion('kind', [
    z.strictObject({ kind: z.literal('number'), n: z.number().int().positive() }),
    z.strictObject({ kind: z.literal('share-of-expected'), share: z.number().gt(0).max(1) }),
  ]),
})

/** Subjects without a usable value, as a share of those who should have one. */
const missingValues = z.strictObject({
  id: identifier,
  kind: z.literal('missing-values'),
  scope: z.enum(['compared-arms', 'all-arms']),
  most: z.number().min(0).lt(1),
})

const kinds = [normality, equalSpread, symmetry, positiveValues, count, missingValues] as const

/** A prerequisite of a fallback step: it must be met. */
export const requirementSchema = z.discriminatedUnion('kind', [...kinds])
export type Requirement = z.infer<typeof requirementSchema>

const onFailure = { onFailure: z.enum(CONSEQUENCES) }

/** A prerequisite of the planned method, with what its failure does. */
export const prerequisiteSchema = z.discriminatedUnion('kind', [
  normality.extend(onFailure), equalSpread.extend(onFailure), symmetry.extend(onFailure),
  positiveValues.extend(onFailure), count.extend(onFailure), missingValues.extend(onFailure),
])
export type Prerequisite = z.infer<typeof prerequisiteSchema>
