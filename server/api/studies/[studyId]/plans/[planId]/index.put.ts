import { savePlanOperation } from '#shared/contract/plans'
import { savePlan } from '../../../../../services/planDrafts'

export default defineApiHandler(savePlanOperation, ({ params, body, revision, viewer, db }) =>
  savePlan(db, { ...params, ...body, revision, viewer }))
