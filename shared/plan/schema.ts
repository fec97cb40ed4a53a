import { z } from 'zod'
import { analysisSchema } from './analysisSchema'
import { dateText, identifier, line, unique } from './parts'
import { SCREEN_KINDS } from './terms'

const range = z.strictObject({ min: z.number().nullable(), max: z.number().nullable() })
  .refine(({ min, max }) => min === null || max === null || min < max, { message: 'range-empty', path: ['max'] })

const arm = z.strictObject({ id: identifier, label: line, ratio: z.number().int().positive().max(20) })

/** `id` is the value that stands in the extract's visit column. */
const visit = z.strictObject({ id: line, label: line })

/** Subjects whose flag column carries the value belong to the set. */
const analysisSet = z.strictObject({ id: identifier, label: line, column: identifier, value: line })

const endpoint = z.strictObject({
  /** The parameter code that stands in the extract. */
  id: identifier,
  label: line,
  unit: line,
  possible: range,
  plausible: range,
  derivation: z.enum(['none', 'change', 'percent-change']),
})

const look = z.strictObject({
  id: identifier,
  name: line,
  cutOff: dateText,
  daysBefore: z.number().int().min(0).max(366),
  daysAfter: z.number().int().min(0).max(366),
  expectedSubjects: z.number().int().positive(),
})

const screen = z.strictObject({ id: identifier, kind: z.enum(SCREEN_KINDS), action: z.enum(['hold', 'warn']) })

/**
 * The plan: one JSON document per version, holding everything that a verdict depends on (docs/plan-file.md).
 * Rules that look across its parts stand in `consistency.ts`; issues carry codes, worded under `plan.issues`.
 */
export const planSchema = z.strictObject({
  format: z.literal('stipule-plan/1'),
  protocol: z.strictObject({ number: line, version: line, title: line }),
  blinding: z.enum(['blinded', 'open-label']),
  arms: unique(z.array(arm).min(1).max(12)),
  visits: unique(z.array(visit).min(1).max(60)),
  analysisSets: unique(z.array(analysisSet).min(1).max(12)),
  endpoints: unique(z.array(endpoint).min(1).max(100)),
  looks: unique(z.array(look).max(24)),
  decisionPoint: z.strictObject({ name: line, expectedSubjects: z.number().int().positive() }),
  release: z.strictObject({
    armDependent: z.enum(['decision-point', 'each-look']),
    /** Whether a failed arm-dependent prerequisite is named to those not cleared. */
    namesFailed: z.boolean(),
  }),
  acknowledger: z.strictObject({
    /** The investigator named by e-mail address; `null` means the coordinating investigator. */
    email: z.string().email().nullable(),
    days: z.number().int().min(1).max(90),
  }),
  screens: unique(z.array(screen).max(12)),
  analyses: unique(z.array(analysisSchema).min(1).max(60)),
})

export type Plan = z.infer<typeof planSchema>
export type Arm = Plan['arms'][number]
export type Endpoint = Plan['endpoints'][number]
export type Look = Plan['looks'][number]
