import { listExtractsOperation } from '#shared/contract/extracts'
import { listExtracts } from '../../../../services/extractViews'

export default defineApiHandler(listExtractsOperation, ({ viewer, params, db }) => listExtracts(db, { ...params, viewer }))
