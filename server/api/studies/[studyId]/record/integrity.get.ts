import { verifyRecordOperation } from '#shared/contract/record'
import { viewIntegrity } from '../../../../services/recordViews'

export default defineApiHandler(verifyRecordOperation, ({ params, db }) => viewIntegrity(db, params))
