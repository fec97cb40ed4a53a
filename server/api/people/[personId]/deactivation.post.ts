import { deactivatePersonOperation } from '#shared/contract/people'
import { deactivatePerson } from '../../../services/people'

export default defineApiHandler(deactivatePersonOperation, ({ viewer, params, body, db }) =>
  deactivatePerson(db, { ...params, ...body, viewer }))
