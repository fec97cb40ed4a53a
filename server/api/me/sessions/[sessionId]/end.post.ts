import { endSessionOperation } from '#shared/contract/session'
import { endOwnSession } from '../../../../services/sessions'

export default defineApiHandler(endSessionOperation, ({ viewer, params, db }) =>
  endOwnSession(db, { ...params, viewer }))
