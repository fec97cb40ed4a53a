import { listStudiesOperation } from '#shared/contract/studies'
import { listStudies } from '../../services/studies'

export default defineApiHandler(listStudiesOperation, ({ viewer, db }) =>
  listStudies(db, { viewer }))
