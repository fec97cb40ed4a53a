import { secondSettlementOperation } from '#shared/contract/deviations'
import { secondSettlement } from '../../../../../services/settlements'

export default defineApiHandler(secondSettlementOperation, ({ params, body, viewer, db }) =>
  secondSettlement(db, { ...params, ...body, viewer }))
