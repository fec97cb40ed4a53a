import { listMembersOperation } from '#shared/contract/members'
import { listMembers } from '../../../../services/members'

export default defineApiHandler(listMembersOperation, ({ params, db }) =>
  listMembers(db, params))
