import { acknowledgeOperation } from '#shared/contract/deviations'
import { acknowledge } from '../../../../../services/acknowledgements'

export default defineApiHandler(acknowledgeOperation, ({ params, body, viewer, db }) =>
  acknowledge(db, { ...params, ...body, viewer }))
