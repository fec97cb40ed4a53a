import { readPlanOperation } from '#shared/contract/plans'
import { readPlan } from '../../../../../services/plans'

export default defineApiHandler(readPlanOperation, ({ params, db }) => readPlan(db, params))
