import { breakBlindOperation } from '#shared/contract/ledger'
import { breakBlind } from '../../../../services/events'

export default defineApiHandler(breakBlindOperation, ({ viewer, params, body, db }) => breakBlind(db, { ...params, ...body, viewer }))
