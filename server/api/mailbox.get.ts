import { readMailboxOperation } from '#shared/contract/mailbox'
import { readMailbox } from '../services/mailbox'

export default defineApiHandler(readMailboxOperation, ({ viewer, db }) => readMailbox(db, { viewer }))
