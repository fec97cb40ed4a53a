import { resolveQueryOperation } from '#shared/contract/extracts'
import { resolveQuery } from '../../../../../../../services/queries'

export default defineApiHandler(resolveQueryOperation, ({ viewer, params, body, db }) => resolveQuery(db, { ...params, ...body, viewer }))
