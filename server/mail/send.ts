import { createTransport } from 'nodemailer'
import type { Mail } from './compose'

/** Hands one mail to the SMTP server; the connection is closed again, mails are few. */
export async function sendMail({ to, subject, text }: Mail, { smtpUrl, from }: { smtpUrl: string, from: string }): Promise<void> {
  const transport = createTransport(smtpUrl)
  try {
    await transport.sendMail({ from, to, subject, text })
  }
  finally {
    transport.close()
  }
}
