import { listAllocationsOperation } from '#shared/contract/allocations'
import { listAllocations } from '../../../../services/allocations'

export default defineApiHandler(listAllocationsOperation, ({ viewer, params, db }) => listAllocations(db, { ...params, viewer }))
