import { z } from 'zod'
import { CHAIN_FAULTS } from '../record/verifyChain'
import { defineOperation } from './operation'
import { EXAMPLE, hashText, momentText, studyParams } from './parts'

const fieldValue = z.union([z.string(), z.number(), z.boolean(), z.null()])

const entryView = z.strictObject({
  seq: z.number().int(),
  /** As it is hashed: text, since the hash is over these characters. */
  time: z.string(),
  clockStepBack: z.boolean(),
  actor: z.strictObject({ personId: z.string().nullable(), name: z.string().nullable(), roles: z.array(z.string()) }),
  requestId: z.string().nullable(),
  origin: z.string().nullable(),
  action: z.string(),
  subject: z.string(),
  /** A field that depends on arms is told to cleared members; others get its commitment, which still verifies. */
  detail: z.record(z.union([z.strictObject({ salt: z.string(), value: fieldValue }), z.strictObject({ commitment: hashText })])),
  detailHash: hashText,
  previousHash: hashText,
  hash: hashText,
})
export type RecordEntryView = z.infer<typeof entryView>

/** Entries of the study after a sequence number, oldest first. */
export const listRecordOperation = defineOperation({
  id: 'record.list', method: 'GET', path: '/api/studies/[studyId]/record', action: 'record.read', scope: 'study',
  params: studyParams, query: z.strictObject({ after: z.coerce.number().int().min(0).default(0), limit: z.coerce.number().int().min(1).max(200).default(100) }), body: null,
  answer: z.strictObject({ entries: z.array(entryView), next: z.number().int().nullable(), size: z.number().int() }), errors: [], example: { params: { studyId: EXAMPLE.id } },
})

/** Recomputes every hash of the study's chain. */
export const verifyRecordOperation = defineOperation({
  id: 'record.verify', method: 'GET', path: '/api/studies/[studyId]/record/integrity', action: 'record.read', scope: 'study',
  params: studyParams, query: null, body: null,
  answer: z.strictObject({ size: z.number().int(), root: hashText, checkedAt: momentText, fault: z.strictObject({ seq: z.number().int(), code: z.enum(CHAIN_FAULTS) }).nullable() }),
  errors: [], example: { params: { studyId: EXAMPLE.id } },
})

/** Kinds of changes as they happen, ids only; what may be seen of them is read through the other operations. */
export const streamStudyOperation = defineOperation({
  id: 'study.stream', method: 'GET', path: '/api/studies/[studyId]/events-stream', action: 'study.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: { media: 'events', types: ['text/event-stream'] }, errors: [], example: { params: { studyId: EXAMPLE.id } },
})
