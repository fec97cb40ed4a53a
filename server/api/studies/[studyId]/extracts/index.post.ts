import { uploadExtractOperation } from '#shared/contract/extracts'
import { uploadExtract } from '../../../../services/extractUpload'

export default defineApiHandler(uploadExtractOperation, ({ viewer, params, query, db, event }) =>
  uploadExtract(db, { ...params, ...query, source: uploadedBytes(event), viewer }))
