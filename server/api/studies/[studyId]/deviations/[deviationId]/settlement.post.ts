import { settleOperation } from '#shared/contract/deviations'
import { settle } from '../../../../../services/settlements'

export default defineApiHandler(settleOperation, ({ params, body, viewer, db }) => settle(db, { ...params, ...body, viewer }))
