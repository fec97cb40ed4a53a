import { readLedgerOperation } from '#shared/contract/ledger'
import { readLedger } from '../../../services/ledger'

export default defineApiHandler(readLedgerOperation, ({ params, db }) => readLedger(db, params))
