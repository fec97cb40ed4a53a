import { giveReasonOperation } from '#shared/contract/extracts'
import { giveReason } from '../../../../../services/extracts'

export default defineApiHandler(giveReasonOperation, ({ viewer, params, body, db }) => giveReason(db, { ...params, ...body, viewer }))
