import { z } from 'zod'
import { finding } from './extracts'
import { defineOperation } from './operation'
import { EXAMPLE, hashText, momentText, personView, studyParams } from './parts'

/** A list as cleared members see it; findings quote what stands in it. */
export const allocationView = z.strictObject({
  id: z.string().uuid(),
  kind: z.enum(['true', 'dummy']),
  state: z.enum(['accepted', 'refused']),
  uploadedBy: personView,
  receivedAt: momentText,
  hash: hashText,
  subjects: z.number().int(),
  findings: z.array(finding),
})

export const listAllocationsOperation = defineOperation({
  id: 'allocations.list', method: 'GET', path: '/api/studies/[studyId]/allocations', action: 'allocation.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ allocations: z.array(allocationView) }), errors: [],
  example: { params: { studyId: EXAMPLE.id } },
})

/** Sealed on arrival; joined to extracts only inside the judge. Extracts already received are judged with it. */
export const uploadAllocationOperation = defineOperation({
  id: 'allocations.upload', method: 'POST', path: '/api/studies/[studyId]/allocations', action: 'allocation.upload', scope: 'study',
  params: studyParams, query: z.strictObject({ kind: z.enum(['true', 'dummy']) }),
  body: { media: 'upload', types: ['text/csv', 'application/octet-stream'] }, answer: allocationView,
  errors: ['plan-not-signed', 'too-large', 'invalid-input', 'separation-of-duties', 'wrong-state'], example: { params: { studyId: EXAMPLE.id }, query: { kind: 'true' } },
})
