import { readExtractOperation } from '#shared/contract/extracts'
import { viewExtract } from '../../../../../services/extractViews'

export default defineApiHandler(readExtractOperation, ({ viewer, params, db }) => viewExtract(db, { ...params, viewer }))
