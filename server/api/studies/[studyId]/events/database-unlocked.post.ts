import { unlockDatabaseOperation } from '#shared/contract/ledger'
import { unlockDatabase } from '../../../../services/events'

export default defineApiHandler(unlockDatabaseOperation, ({ viewer, params, body, db }) => unlockDatabase(db, { ...params, ...body, viewer }))
