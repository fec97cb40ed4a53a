import { downloadExtractOperation } from '#shared/contract/extracts'
import { downloadExtract } from '../../../../../services/extracts'

export default defineApiHandler(downloadExtractOperation, async ({ viewer, params, db, event }) =>
  sendDownload(event, await downloadExtract(db, { ...params, viewer })))
