import { proposeClearanceOperation } from '#shared/contract/clearances'
import { proposeClearance } from '../../../../services/clearances'

export default defineApiHandler(proposeClearanceOperation, ({ viewer, params, body, db }) =>
  proposeClearance(db, { ...params, ...body, viewer }))
