import { mapExtractOperation } from '#shared/contract/extracts'
import { mapExtract } from '../../../../../services/extracts'

export default defineApiHandler(mapExtractOperation, ({ viewer, params, body, db }) => mapExtract(db, { ...params, mapping: body, viewer }))
