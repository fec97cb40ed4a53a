import { signPlanAsAuthorOperation } from '#shared/contract/plans'
import { signPlanAsAuthor } from '../../../../../services/planSignatures'

export default defineApiHandler(signPlanAsAuthorOperation, ({ params, body, revision, viewer, db }) =>
  signPlanAsAuthor(db, { ...params, ...body, revision, viewer }))
