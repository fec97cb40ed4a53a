import { exportPlanOperation } from '#shared/contract/plans'
import { exportPlan } from '../../../../../services/plans'

export default defineApiHandler(exportPlanOperation, ({ params, db }) => exportPlan(db, params))
