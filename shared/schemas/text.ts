import { z } from 'zod'

const CONTROL = /\p{Cc}/u

/** One line of text as people type it: blanks at the ends are dropped, the rest is kept, in Unicode form NFC. */
export const lineText = (maximum: number) => z.string().trim()
  .min(1, 'required')
  .max(maximum, 'too-long')
  .refine(text => !CONTROL.test(text), 'control-character')
  .transform(text => text.normalize('NFC'))

/** An e-mail address as an account's identifier: compared in lower case. */
export const emailAddress = z.string().trim().toLowerCase().max(254, 'too-long').email('not-an-email')

/** A password to be set; length is what counts, so nothing else is asked of it. */
export const newPassword = z.string().min(12, 'password-too-short').max(200, 'too-long')
