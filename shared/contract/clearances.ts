import { z } from 'zod'
import { clearanceId, personId } from '../schemas/ids'
import { defineOperation } from './operation'
import { EXAMPLE, momentText, personView, reasonText, studyParams, uuid } from './parts'

/** Permission to see arms. Proposed while `grantedAt` is null, in force until `endedAt`. */
export const clearanceView = z.strictObject({
  id: uuid,
  person: personView,
  reason: z.string(),
  proposedBy: personView,
  proposedAt: momentText,
  grantedBy: personView.nullable(),
  grantedAt: momentText.nullable(),
  endedAt: momentText.nullable(),
  endReason: z.string().nullable(),
})
export type ClearanceView = z.infer<typeof clearanceView>

const params = studyParams.extend({ clearanceId })
const study = { studyId: EXAMPLE.id }
const example = { params: { ...study, clearanceId: EXAMPLE.id } }

export const listClearancesOperation = defineOperation({
  id: 'clearances.list', method: 'GET', path: '/api/studies/[studyId]/clearances', action: 'members.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ clearances: z.array(clearanceView) }), errors: [], example: { params: study },
})

/** For another biostatistician of the study, never for oneself. */
export const proposeClearanceOperation = defineOperation({
  id: 'clearances.propose', method: 'POST', path: '/api/studies/[studyId]/clearances', action: 'clearance.propose', scope: 'study',
  params: studyParams, query: null, body: z.strictObject({ personId, reason: reasonText }), answer: clearanceView,
  errors: ['already-done', 'wrong-state', 'separation-of-duties'],
  example: { params: study, body: { personId: EXAMPLE.id, reason: 'Independent centre of the monitoring committee.' } },
})

export const grantClearanceOperation = defineOperation({
  id: 'clearances.grant', method: 'POST', path: '/api/studies/[studyId]/clearances/[clearanceId]/grant', action: 'clearance.grant', scope: 'study',
  params, query: null, body: null, answer: clearanceView, errors: ['already-done', 'wrong-state', 'separation-of-duties'], example,
})

/** Ends a clearance or declines a proposal; exposure, once begun, stays. */
export const endClearanceOperation = defineOperation({
  id: 'clearances.end', method: 'POST', path: '/api/studies/[studyId]/clearances/[clearanceId]/end', action: 'clearance.grant', scope: 'study',
  params, query: null, body: z.strictObject({ reason: reasonText }), answer: clearanceView, errors: ['already-done'],
  example: { ...example, body: { reason: 'The committee has closed.' } },
})

const exposureView = z.strictObject({
  person: personView,
  how: z.enum(['allocation', 'arm-level-view', 'disclosure']),
  since: momentText,
  /** Why and by whom; null when no clearance was in force. */
  clearance: z.strictObject({ reason: z.string(), grantedBy: personView }).nullable(),
})

/** Who was unblinded, when, how, why and by whom. */
export const listExposuresOperation = defineOperation({
  id: 'exposures.list', method: 'GET', path: '/api/studies/[studyId]/exposures', action: 'members.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ exposures: z.array(exposureView) }), errors: [], example: { params: study },
})
