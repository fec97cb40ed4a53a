import { listPlansOperation } from '#shared/contract/plans'
import { listPlans } from '../../../../services/plans'

export default defineApiHandler(listPlansOperation, ({ params, db }) => listPlans(db, params))
