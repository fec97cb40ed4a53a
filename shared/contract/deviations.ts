import { z } from 'zod'
import type { MemoContent } from '../memo/content'
import { deviationId, memoId } from '../schemas/domainIds'
import { seenVerdict } from './ledger'
import { defineOperation } from './operation'
import { commentText, credentials, EXAMPLE, hashText, momentText, personView, reasonText, signatureView, studyParams, uuid } from './parts'

const deviationParams = studyParams.extend({ deviationId })

export const DEVIATION_CLASSES = ['foreseen-switch', 'departure', 'unresolved'] as const
export const SETTLEMENTS = ['accept-step', 'keep-under-observation', 'amend-plan', 'report-without-claim', 'overrule'] as const

/** `open` until settled; `awaiting-second` while an overruling lacks its second biostatistician. */
export const DEVIATION_STATES = ['open', 'under-observation', 'awaiting-second', 'settled', 'memo-signed', 'amended'] as const

export const acknowledgementView = z.strictObject({
  /** `outstanding` once the days allowed have passed; it changes no verdict. */
  state: z.enum(['awaited', 'acknowledged', 'declined', 'outstanding']),
  dueAt: momentText,
  person: personView.nullable(),
  comment: z.string().nullable(),
  signature: signatureView.nullable(),
})

export const deviationSummary = z.strictObject({
  id: uuid,
  number: z.number().int(),
  analysis: z.strictObject({ id: z.string(), label: z.string(), importance: z.string() }),
  state: z.enum(DEVIATION_STATES),
  deviationClass: z.enum(DEVIATION_CLASSES),
  /** The newest released verdict. */
  verdict: seenVerdict,
  stepLabel: z.string().nullable(),
  binding: z.boolean(),
  openedAt: momentText,
  acknowledgement: acknowledgementView,
})

export const deviationView = deviationSummary.extend({
  planVersion: z.number().int(),
  planHash: hashText,
  /** One entry per extract whose released verdict added to it, oldest first. */
  entries: z.array(z.strictObject({
    extract: z.strictObject({ id: uuid, number: z.number().int(), title: z.string(), cutOff: z.string() }),
    verdict: seenVerdict, stepLabel: z.string().nullable(), releasedAt: momentText,
  })),
  /** Arm-free prerequisites that failed, or those whose naming the plan allows; null when a condition stays behind the blind. */
  failed: z.array(z.strictObject({ kind: z.string(), label: z.string() })).nullable(),
  planned: z.strictObject({ method: z.string(), summaryMeasure: z.string() }),
  settlements: z.array(z.strictObject({
    kind: z.enum(SETTLEMENTS), note: z.string(), by: personView, at: momentText, signature: signatureView,
    second: z.strictObject({ by: personView, at: momentText, signature: signatureView }).nullable(),
  })),
  /** What may be settled now, by what the study's events allow. */
  settlementsAllowed: z.array(z.enum(SETTLEMENTS)),
  memo: z.strictObject({ id: uuid, number: z.number().int(), state: z.string() }).nullable(),
})
export type DeviationView = z.infer<typeof deviationView>
export type DeviationSummary = z.infer<typeof deviationSummary>

const example = { params: { studyId: EXAMPLE.id, deviationId: EXAMPLE.id } }
const signed = { identifier: 'tomas@example.org', password: '…' }
const errors = ['wrong-state', 'already-done', 'separation-of-duties', 'exposed', 'signature-refused'] as const

export const listDeviationsOperation = defineOperation({
  id: 'deviations.list', method: 'GET', path: '/api/studies/[studyId]/deviations', action: 'deviation.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ deviations: z.array(deviationSummary) }), errors: [], example: { params: { studyId: EXAMPLE.id } },
})

export const readDeviationOperation = defineOperation({
  id: 'deviations.read', method: 'GET', path: '/api/studies/[studyId]/deviations/[deviationId]', action: 'deviation.read', scope: 'study',
  params: deviationParams, query: null, body: null, answer: deviationView, errors: [], example,
})

/** Informed, not agreed; declining asks for a reason and changes no verdict. */
export const acknowledgeOperation = defineOperation({
  id: 'deviations.acknowledge', method: 'POST', path: '/api/studies/[studyId]/deviations/[deviationId]/acknowledgement', action: 'deviation.acknowledge', scope: 'study',
  params: deviationParams, query: null, body: credentials.extend({ decision: z.enum(['acknowledged', 'declined']), comment: commentText.nullable() }),
  answer: deviationView, errors, example: { ...example, body: { ...signed, decision: 'acknowledged', comment: null } },
})

export const settleOperation = defineOperation({
  id: 'deviations.settle', method: 'POST', path: '/api/studies/[studyId]/deviations/[deviationId]/settlement', action: 'deviation.settle', scope: 'study',
  params: deviationParams, query: null, body: credentials.extend({ kind: z.enum(SETTLEMENTS), note: reasonText }), answer: deviationView, errors,
  example: { ...example, body: { ...signed, kind: 'accept-step', note: 'In accordance with the plan.' } },
})

/** The second of the two biostatisticians that an overruling needs. */
export const secondSettlementOperation = defineOperation({
  id: 'deviations.second-settlement', method: 'POST', path: '/api/studies/[studyId]/deviations/[deviationId]/second-settlement', action: 'deviation.settle', scope: 'study',
  params: deviationParams, query: null, body: credentials, answer: deviationView, errors, example: { ...example, body: signed },
})

const memoParams = studyParams.extend({ memoId })

export const memoSummary = z.strictObject({
  id: uuid,
  number: z.number().int(),
  deviation: z.strictObject({ id: uuid, number: z.number().int() }),
  analysis: z.string(),
  edition: z.enum(['blinded', 'cleared', 'open-label']),
  deviationClass: z.enum(DEVIATION_CLASSES),
  binding: z.boolean(),
  state: z.enum(['awaiting-signature', 'rendering', 'issued', 'failed']),
  contentHash: hashText,
  pdfHash: hashText.nullable(),
  issuedAt: momentText.nullable(),
  signatures: z.array(signatureView),
})
export type MemoSummary = z.infer<typeof memoSummary>

export const listMemosOperation = defineOperation({
  id: 'memos.list', method: 'GET', path: '/api/studies/[studyId]/memos', action: 'memo.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ memos: z.array(memoSummary) }), errors: [], example: { params: { studyId: EXAMPLE.id } },
})

const memoContent = z.custom<MemoContent>(value => typeof value === 'object' && value !== null && 'format' in value)

/** What will be signed, or was: the content as it stands now, with the hash to be signed. */
export const readMemoOperation = defineOperation({
  id: 'memos.read', method: 'GET', path: '/api/studies/[studyId]/memos/[memoId]', action: 'memo.read', scope: 'study',
  params: memoParams, query: null, body: null, answer: memoSummary.extend({ content: memoContent, acknowledgementAwaited: z.boolean() }), errors: [],
  example: { params: { studyId: EXAMPLE.id, memoId: EXAMPLE.id } },
})

/** The content that is signed; the PDF is made from it and from the signature by a worker. */
export const signMemoOperation = defineOperation({
  id: 'memos.sign', method: 'POST', path: '/api/studies/[studyId]/memos/[memoId]/signature', action: 'memo.sign', scope: 'study',
  params: memoParams, query: null, body: credentials.extend({ contentHash: hashText }), answer: memoSummary, errors: [...errors, 'revision-changed'],
  example: { params: { studyId: EXAMPLE.id, memoId: EXAMPLE.id }, body: { ...signed, contentHash: EXAMPLE.hash } },
})

export const downloadMemoOperation = defineOperation({
  id: 'memos.download', method: 'GET', path: '/api/studies/[studyId]/memos/[memoId]/pdf', action: 'memo.read', scope: 'study',
  params: memoParams, query: null, body: null, answer: { media: 'file', types: ['application/pdf'] }, errors: ['wrong-state'],
  example: { params: { studyId: EXAMPLE.id, memoId: EXAMPLE.id } },
})
