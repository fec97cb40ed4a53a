import { listDeviationsOperation, listMemosOperation, readDeviationOperation, readMemoOperation } from '#shared/contract/deviations'

export const useDeviations = (studyId: string) => useApiData(listDeviationsOperation, { params: { studyId } })

export const useDeviation = (params: { studyId: string, deviationId: string }) => useApiData(readDeviationOperation, { params })

export const useMemos = (studyId: string) => useApiData(listMemosOperation, { params: { studyId } })

export const useMemoContent = (params: { studyId: string, memoId: string }) => useApiData(readMemoOperation, { params })
