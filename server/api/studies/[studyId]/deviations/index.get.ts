import { listDeviationsOperation } from '#shared/contract/deviations'
import { listDeviations } from '../../../../services/deviationViews'

export default defineApiHandler(listDeviationsOperation, ({ params, db }) => listDeviations(db, params))
