import { listClearancesOperation, listExposuresOperation } from '#shared/contract/clearances'
import { listMembersOperation } from '#shared/contract/members'
import { listPeopleOperation } from '#shared/contract/people'
import { listStudiesOperation } from '#shared/contract/studies'

export const useStudies = () => useApiData(listStudiesOperation, {})

/** Every account of the installation; for administrators. */
export const usePeople = () => useApiData(listPeopleOperation, {})

export const useMembers = (studyId: string) => useApiData(listMembersOperation, { params: { studyId } })

export const useClearances = (studyId: string) => useApiData(listClearancesOperation, { params: { studyId } })

export const useExposures = (studyId: string) => useApiData(listExposuresOperation, { params: { studyId } })
