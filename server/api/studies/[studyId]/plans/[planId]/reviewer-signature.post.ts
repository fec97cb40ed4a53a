import { reviewPlanOperation } from '#shared/contract/plans'
import { reviewPlan } from '../../../../../services/planSignatures'

export default defineApiHandler(reviewPlanOperation, ({ params, body, viewer, db }) => reviewPlan(db, { ...params, ...body, viewer }))
