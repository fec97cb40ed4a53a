import { signReleaseOperation } from '#shared/contract/ledger'
import { signRelease } from '../../../../../services/releases'

export default defineApiHandler(signReleaseOperation, ({ viewer, params, body, db }) => signRelease(db, { ...params, ...body, viewer }))
