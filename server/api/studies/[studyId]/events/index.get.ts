import { listEventsOperation } from '#shared/contract/ledger'
import { listEvents } from '../../../../services/events'

export default defineApiHandler(listEventsOperation, ({ params, db }) => listEvents(db, params))
