import { signMemoOperation } from '#shared/contract/deviations'
import { signMemo } from '../../../../../services/memos'

export default defineApiHandler(signMemoOperation, ({ params, body, viewer, db }) => signMemo(db, { ...params, ...body, viewer }))
