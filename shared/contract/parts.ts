import { z } from 'zod'
import { studyId } from '../schemas/ids'

export const uuid = z.string().uuid()
/** ISO 8601, UTC, milliseconds. */
export const momentText = z.string().datetime({ precision: 3 })
export const hashText = z.string().regex(/^[0-9a-f]{64}$/)

export const studyParams = z.strictObject({ studyId })

/** Identifier and password again, at every signing; the reason where the act asks for one. */
export const credentials = z.strictObject({
  identifier: z.string().email().max(254),
  password: z.string().min(1).max(200),
})

/** A signature as it is shown: printed name, role then, meaning, moment, hash of exactly what was signed. */
export const signatureView = z.strictObject({
  name: z.string(),
  role: z.string(),
  meaning: z.string(),
  signedAt: momentText,
  hash: hashText,
  reason: z.string().nullable(),
  status: z.enum(['valid', 'void']),
})
export type SignatureView = z.infer<typeof signatureView>

/** NUL, which no text of the database can hold, and halves of surrogate pairs, which no hash can cover. */
const unstorable = (text: string) => text.includes('\u0000') || /\p{Surrogate}/u.test(text)

const prose = (text: z.ZodString) => text.refine(words => !unstorable(words), 'control-character').transform(words => words.normalize('NFC'))

export const reasonText = prose(z.string().trim().min(3, 'too-short').max(2000, 'too-long'))
/** What somebody may add; empty when they add nothing. */
export const commentText = prose(z.string().trim().max(2000, 'too-long'))

/** A person where they are named beside an act. */
export const personView = z.strictObject({ id: uuid, name: z.string() })

/** Example values shared by the declarations. */
export const EXAMPLE = {
  id: '01935f7e-6a5c-7c4e-9f1d-2b6a8f0c4d21',
  hash: 'b2a5c1d4e7f80912a3b4c5d6e7f8091a2b3c4d5e6f708192a3b4c5d6e7f80911',
  moment: '2026-06-12T09:14:00.000Z',
} as const
