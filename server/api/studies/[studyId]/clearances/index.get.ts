import { listClearancesOperation } from '#shared/contract/clearances'
import { listClearances } from '../../../../services/clearances'

export default defineApiHandler(listClearancesOperation, ({ params, db }) =>
  listClearances(db, params))
