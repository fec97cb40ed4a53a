import { readDeviationOperation } from '#shared/contract/deviations'
import { viewDeviation } from '../../../../../services/deviationViews'

export default defineApiHandler(readDeviationOperation, ({ params, db }) => viewDeviation(db, params))
