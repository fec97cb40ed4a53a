import { createStudyOperation } from '#shared/contract/studies'
import { createStudy } from '../../services/studies'

export default defineApiHandler(createStudyOperation, ({ viewer, body, db }) =>
  createStudy(db, { ...body, viewer }))
