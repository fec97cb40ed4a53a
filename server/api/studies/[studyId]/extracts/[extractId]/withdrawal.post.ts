import { withdrawExtractOperation } from '#shared/contract/extracts'
import { withdrawExtract } from '../../../../../services/extracts'

export default defineApiHandler(withdrawExtractOperation, ({ viewer, params, body, db }) => withdrawExtract(db, { ...params, ...body, viewer }))
