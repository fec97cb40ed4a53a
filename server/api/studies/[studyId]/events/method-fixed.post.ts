import { fixMethodOperation } from '#shared/contract/ledger'
import { fixMethod } from '../../../../services/events'

export default defineApiHandler(fixMethodOperation, ({ viewer, params, body, db }) => fixMethod(db, { ...params, ...body, viewer }))
