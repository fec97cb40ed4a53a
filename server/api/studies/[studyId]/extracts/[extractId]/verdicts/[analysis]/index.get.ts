import { readVerdictOperation } from '#shared/contract/ledger'
import { readVerdict } from '../../../../../../../services/verdicts'

export default defineApiHandler(readVerdictOperation, ({ params, db }) => readVerdict(db, params))
