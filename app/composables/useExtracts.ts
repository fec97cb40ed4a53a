import { listAllocationsOperation } from '#shared/contract/allocations'
import { listExtractsOperation, readExtractOperation } from '#shared/contract/extracts'

export const useExtracts = (studyId: string) => useApiData(listExtractsOperation, { params: { studyId } })

export const useExtract = (params: { studyId: string, extractId: string }) => useApiData(readExtractOperation, { params })

export const useAllocations = (studyId: string) => useApiData(listAllocationsOperation, { params: { studyId } })
