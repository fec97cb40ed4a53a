import type { Transaction } from '../database/client'
import { enqueue } from '../jobs/enqueue'
import type { MailJob } from '../jobs/queues'

/** A mail leaves when, and only when, the transaction that causes it commits. */
export const enqueueMail = (tx: Transaction, mail: MailJob): Promise<void> => enqueue(tx, 'mail', mail)
