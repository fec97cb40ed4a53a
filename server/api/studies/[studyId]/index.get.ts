import { readStudyOperation } from '#shared/contract/studies'
import { readStudy } from '../../../services/studies'

export default defineApiHandler(readStudyOperation, ({ params, db }) =>
  readStudy(db, params))
