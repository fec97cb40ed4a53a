import { listEventsOperation, previewReleaseOperation, readArmsOperation, readLedgerOperation, readVerdictOperation } from '#shared/contract/ledger'

export const useLedger = (studyId: string) => useApiData(readLedgerOperation, { params: { studyId } })

export const useEvents = (studyId: string) => useApiData(listEventsOperation, { params: { studyId } })

export const useVerdict = (params: { studyId: string, extractId: string, analysis: string }) => useApiData(readVerdictOperation, { params })

/** Figures by arm; asking for them is recorded. */
export const useArms = () => useApi(readArmsOperation)

export const useReleasePreview = (params: { studyId: string, extractId: string }) => useApiData(previewReleaseOperation, { params })
