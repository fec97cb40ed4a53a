import { previewReleaseOperation } from '#shared/contract/ledger'
import { previewRelease } from '../../../../../services/releases'

export default defineApiHandler(previewReleaseOperation, ({ viewer, params, db }) => previewRelease(db, { ...params, viewer }))
