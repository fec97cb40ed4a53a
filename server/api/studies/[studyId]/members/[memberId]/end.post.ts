import { endMemberOperation } from '#shared/contract/members'
import { endMember } from '../../../../../services/members'

export default defineApiHandler(endMemberOperation, ({ viewer, params, body, db }) =>
  endMember(db, { ...params, ...body, viewer }))
