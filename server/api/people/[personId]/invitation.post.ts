import { inviteAgainOperation } from '#shared/contract/people'
import { inviteAgain } from '../../../services/people'

export default defineApiHandler(inviteAgainOperation, ({ viewer, params, db }) =>
  inviteAgain(db, { ...params, viewer }))
