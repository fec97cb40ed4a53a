import { grantClearanceOperation } from '#shared/contract/clearances'
import { grantClearance } from '../../../../../services/clearances'

export default defineApiHandler(grantClearanceOperation, ({ viewer, params, db }) =>
  grantClearance(db, { ...params, viewer }))
