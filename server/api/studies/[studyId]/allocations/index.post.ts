import { uploadAllocationOperation } from '#shared/contract/allocations'
import { uploadAllocation } from '../../../../services/allocations'

export default defineApiHandler(uploadAllocationOperation, ({ viewer, params, query, db, event }) =>
  uploadAllocation(db, { ...params, ...query, source: uploadedBytes(event), viewer }))
