import { listExposuresOperation } from '#shared/contract/clearances'
import { listExposures } from '../../../services/exposures'

export default defineApiHandler(listExposuresOperation, ({ params, db }) =>
  listExposures(db, params))
