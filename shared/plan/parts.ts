import { z } from 'zod'

/** One line of text as it is printed: trimmed, NFC, without control characters. */
export const line = z.string().min(1, 'empty').max(200, 'too-long')
  .refine(text => text === text.trim().normalize('NFC'), 'not-trimmed')
  .refine(text => !/\p{Cc}/u.test(text), 'control-character')

/** A short code: of an arm, a parameter, a column, a planned analysis. */
export const identifier = z.string().regex(/^[A-Za-z0-9][A-Za-z0-9_.-]{0,39}$/, 'not-an-identifier')

/** A calendar date, ISO 8601, that exists. */
export const dateText = z.string().regex(/^\d{4}-\d{2}-\d{2}$/, 'not-a-date').refine(isCalendarDate, 'not-a-date')

function isCalendarDate(text: string): boolean {
  const [year = 0, month = 0, day = 0] = text.split('-').map(Number)
  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0
  const days = [31, leap ? 29 : 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31][month - 1]
  return days !== undefined && day >= 1 && day <= days
}

/** A list whose members carry different ids; the second of a pair is named. */
export function unique<T extends { id: string }>(list: z.ZodArray<z.ZodType<T, z.ZodTypeDef, unknown>>) {
  return list.superRefine((members, context) => {
    const seen = new Set<string>()
    members.forEach(({ id }, index) => {
      if (seen.has(id)) context.addIssue({ code: 'custom', message: 'id-repeated', path: [index, 'id'] })
      seen.add(id)
    })
  })
}
