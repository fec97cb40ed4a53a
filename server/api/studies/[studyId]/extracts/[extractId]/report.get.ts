import { readReportOperation } from '#shared/contract/ledger'
import { seenReport } from '../../../../../services/releases'

export default defineApiHandler(readReportOperation, async ({ params, db }) => (await seenReport(db, params)).seen)
