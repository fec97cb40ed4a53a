import { readMemoOperation } from '#shared/contract/deviations'
import { readMemo } from '../../../../../services/memos'

export default defineApiHandler(readMemoOperation, ({ params, db }) => readMemo(db, params))
