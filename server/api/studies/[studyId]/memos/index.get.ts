import { listMemosOperation } from '#shared/contract/deviations'
import { listMemos } from '../../../../services/memos'

export default defineApiHandler(listMemosOperation, ({ params, db }) => listMemos(db, params))
