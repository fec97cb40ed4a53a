import { listRecordOperation } from '#shared/contract/record'
import { listRecord } from '../../../../services/recordViews'

export default defineApiHandler(listRecordOperation, ({ viewer, params, query, db }) => listRecord(db, { ...params, ...query, viewer }))
