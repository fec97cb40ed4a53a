import { createPlanOperation } from '#shared/contract/plans'
import { createPlan } from '../../../../services/planDrafts'

export default defineApiHandler(createPlanOperation, ({ params, body, viewer, db }) => createPlan(db, { ...params, ...body, viewer }))
