import { endClearanceOperation } from '#shared/contract/clearances'
import { endClearance } from '../../../../../services/clearances'

export default defineApiHandler(endClearanceOperation, ({ viewer, params, body, db }) =>
  endClearance(db, { ...params, ...body, viewer }))
