import type { z } from 'zod'
import { brandedId } from './ids'

export const planId = brandedId('PlanId')
export type PlanId = z.output<typeof planId>
export const extractId = brandedId('ExtractId')
export type ExtractId = z.output<typeof extractId>
export const allocationId = brandedId('AllocationId')
export type AllocationId = z.output<typeof allocationId>
export const checkId = brandedId('CheckId')
export type CheckId = z.output<typeof checkId>
export const dataQueryId = brandedId('DataQueryId')
export type DataQueryId = z.output<typeof dataQueryId>
export const releaseId = brandedId('ReleaseId')
export type ReleaseId = z.output<typeof releaseId>
export const studyEventId = brandedId('StudyEventId')
export type StudyEventId = z.output<typeof studyEventId>
export const deviationId = brandedId('DeviationId')
export type DeviationId = z.output<typeof deviationId>
export const memoId = brandedId('MemoId')
export type MemoId = z.output<typeof memoId>
