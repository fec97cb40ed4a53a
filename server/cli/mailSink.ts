import { simpleParser } from 'mailparser'
import { SMTPServer } from 'smtp-server'
import { closeDatabase, database } from '../database/client'
import { newId } from '../database/newId'
import { mailMessage } from '../database/schema/mail'
import { errorFacts, log } from '../log'

/**
 * The demo's mail server: takes every mail on a loopback port and keeps it where the application shows each
 * person their own. Nothing leaves the machine.
 */
const port = Number(process.env.STIPULE_SMTP_PORT)
if (!Number.isInteger(port) || port <= 0) throw new Error('STIPULE_SMTP_PORT is missing')

async function keep(stream: NodeJS.ReadableStream, recipients: readonly string[]): Promise<void> {
  const mail = await simpleParser(stream as Parameters<typeof simpleParser>[0])
  if (recipients.length === 0) return
  await database().insert(mailMessage).values(recipients.map(recipient => ({
    id: newId(), recipient: recipient.toLowerCase(), sender: mail.from?.text ?? '', subject: mail.subject ?? '', body: mail.text ?? '',
  })))
}

const server = new SMTPServer({
  authOptional: true,
  disabledCommands: ['STARTTLS', 'AUTH'],
  logger: false,
  onData(stream, session, done) {
    keep(stream, session.envelope.rcptTo.map(({ address }) => address)).then(() => done(), (error: unknown) => {
      log.error(errorFacts(error))
      done(new Error('could not be kept'))
    })
  },
})
server.on('error', error => log.error(errorFacts(error)))
server.listen(port, '127.0.0.1', () => log.info({ mailSink: 'ready', port }))

function stop(): void {
  server.close(() => void closeDatabase().then(() => process.exit(0)))
}
process.once('SIGTERM', stop)
process.once('SIGINT', stop)
