import { createPersonOperation } from '#shared/contract/people'
import { createPerson } from '../../services/people'

export default defineApiHandler(createPersonOperation, ({ viewer, body, db }) =>
  createPerson(db, { ...body, viewer }))
