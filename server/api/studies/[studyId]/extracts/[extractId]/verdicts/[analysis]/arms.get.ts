import { readArmsOperation } from '#shared/contract/ledger'
import { readArms } from '../../../../../../../services/verdicts'

export default defineApiHandler(readArmsOperation, ({ viewer, params, db }) => readArms(db, { ...params, viewer }))
