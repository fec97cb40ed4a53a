import { downloadMemoOperation } from '#shared/contract/deviations'
import { readMemoFile } from '../../../../../services/memoFiles'

export default defineApiHandler(downloadMemoOperation, async ({ params, db, event }) => {
  const { bytes, number, protocolNumber } = await readMemoFile(db, params)
  setResponseHeader(event, 'content-type', 'application/pdf')
  setResponseHeader(event, 'content-disposition', `attachment; filename="${protocolNumber.replace(/[^\w.-]/g, '_')}-memo-${number}.pdf"`)
  return Buffer.from(bytes)
})
