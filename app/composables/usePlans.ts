import { listPlansOperation, readPlanOperation } from '#shared/contract/plans'

export const usePlans = (studyId: string) => useApiData(listPlansOperation, { params: { studyId } })

export const usePlan = (params: { studyId: string, planId: string }) => useApiData(readPlanOperation, { params })
