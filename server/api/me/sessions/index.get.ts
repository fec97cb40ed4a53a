import { listSessionsOperation } from '#shared/contract/session'
import { listOwnSessions } from '../../../services/sessions'

export default defineApiHandler(listSessionsOperation, ({ viewer, db }) =>
  listOwnSessions(db, { viewer }))
