import { lockDatabaseOperation } from '#shared/contract/ledger'
import { lockDatabase } from '../../../../services/events'

export default defineApiHandler(lockDatabaseOperation, ({ viewer, params, body, db }) => lockDatabase(db, { ...params, ...body, viewer }))
