import { grantMemberOperation } from '#shared/contract/members'
import { grantMember } from '../../../../services/members'

export default defineApiHandler(grantMemberOperation, ({ viewer, params, body, db }) =>
  grantMember(db, { ...params, ...body, viewer }))
