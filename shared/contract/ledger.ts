import { z } from 'zod'
import { ANALYSIS_VERDICTS, PLANNED_METHODS, REASONS } from '../plan/terms'
import type { SeenAnalysis, SeenReport } from '../decision/report'
import { extractId } from '../schemas/domainIds'
import { extractParams } from './extracts'
import { defineOperation } from './operation'
import { credentials, EXAMPLE, hashText, momentText, personView, reasonText, signatureView, studyParams, uuid } from './parts'

export const seenVerdict = z.strictObject({
  word: z.enum([...ANALYSIS_VERDICTS, 'held-behind-the-blind']),
  step: z.string().nullable(),
  reason: z.enum(REASONS).nullable(),
  setAside: z.enum(REASONS).nullable(),
  changesQuestion: z.boolean(),
})

const ledgerColumn = z.strictObject({
  extractId: uuid,
  number: z.number().int(),
  title: z.string(),
  cutOff: z.string(),
  standing: z.enum(['look', 're-cut', 'unscheduled', 'decision-point']),
  planVersion: z.number().int(),
  subjects: z.number().int().nullable(),
  binding: z.boolean(),
  state: z.enum(['judging', 'checked', 'awaiting-reason', 'withdrawn']),
})

const ledgerRow = z.strictObject({
  analysis: z.string(),
  label: z.string(),
  detail: z.strictObject({ endpoint: z.string(), visits: z.array(z.string()), arms: z.array(z.string()), allArms: z.boolean(), pretest: z.boolean() }),
  method: z.enum(PLANNED_METHODS),
  importance: z.enum(['primary', 'key-secondary', 'other']),
  /** By extract; null where this plan version had no such analysis or nothing is judged yet. */
  cells: z.array(z.strictObject({ verdict: seenVerdict.nullable(), stepLabel: z.string().nullable() })),
  deviation: z.strictObject({ id: uuid, number: z.number().int(), state: z.string() }).nullable(),
})

export const ledgerView = z.strictObject({
  planVersion: z.number().int().nullable(),
  planSignedAt: momentText.nullable(),
  columns: z.array(ledgerColumn),
  rows: z.array(ledgerRow),
})
export type LedgerView = z.infer<typeof ledgerView>

/** Reports are made and checked by `release`; the contract only holds that they are plain objects of it. */
const seenAnalysis = z.custom<SeenAnalysis>(value => typeof value === 'object' && value !== null && 'verdict' in value && 'prerequisites' in value)
const seenReport = z.custom<SeenReport>(value => typeof value === 'object' && value !== null && 'view' in value && 'analyses' in value)

export const verdictView = z.strictObject({
  extract: z.strictObject({ id: uuid, number: z.number().int(), title: z.string(), cutOff: z.string(), standing: z.string(), binding: z.boolean() }),
  planVersion: z.number().int(),
  planHash: hashText,
  /** The planned analysis as registered, with endpoint and arms by their labels. */
  analysis: z.unknown(),
  labels: z.strictObject({ endpoint: z.string(), unit: z.string(), arms: z.record(z.string()), set: z.string() }),
  seen: seenAnalysis,
  releasedAt: momentText.nullable(),
  engine: z.string(),
  deviation: z.strictObject({ id: uuid, number: z.number().int() }).nullable(),
})
export type VerdictView = z.infer<typeof verdictView>

export const readLedgerOperation = defineOperation({
  id: 'ledger.read', method: 'GET', path: '/api/studies/[studyId]/ledger', action: 'ledger.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: ledgerView, errors: [], example: { params: { studyId: EXAMPLE.id } },
})

const analysisParams = extractParams.extend({ analysis: z.string().max(40) })
const analysisExample = { params: { studyId: EXAMPLE.id, extractId: EXAMPLE.id, analysis: 'CRP' } }

export const readVerdictOperation = defineOperation({
  id: 'verdict.read', method: 'GET', path: '/api/studies/[studyId]/extracts/[extractId]/verdicts/[analysis]', action: 'verdict.read', scope: 'study',
  params: analysisParams, query: null, body: null, answer: verdictView, errors: ['wrong-state'], example: analysisExample,
})

/** Figures by arm; each reading is recorded and makes the reader exposed. */
export const readArmsOperation = defineOperation({
  id: 'verdict.read-arms', method: 'GET', path: '/api/studies/[studyId]/extracts/[extractId]/verdicts/[analysis]/arms', action: 'arms.read', scope: 'study',
  params: analysisParams, query: null, body: null, answer: verdictView, errors: ['wrong-state'], example: analysisExample,
})

export const readReportOperation = defineOperation({
  id: 'report.read', method: 'GET', path: '/api/studies/[studyId]/extracts/[extractId]/report', action: 'verdict.read', scope: 'study',
  params: extractParams, query: null, body: null, answer: seenReport, errors: ['wrong-state'], example: { params: { studyId: EXAMPLE.id, extractId: EXAMPLE.id } },
})

/** Exactly what the others will see once released. */
export const previewReleaseOperation = defineOperation({
  id: 'release.preview', method: 'GET', path: '/api/studies/[studyId]/extracts/[extractId]/release', action: 'release.preview', scope: 'study',
  params: extractParams, query: null, body: null,
  answer: z.strictObject({ state: z.enum(['open', 'released', 'nothing-to-release', 'not-yet']), hash: hashText, report: seenReport, released: z.strictObject({ at: momentText, signature: signatureView }).nullable() }),
  errors: ['wrong-state'], example: { params: { studyId: EXAMPLE.id, extractId: EXAMPLE.id } },
})

/** Signs over the hash of the preview: what was seen is what is released. */
export const signReleaseOperation = defineOperation({
  id: 'release.sign', method: 'POST', path: '/api/studies/[studyId]/extracts/[extractId]/release', action: 'release.sign', scope: 'study',
  params: extractParams, query: null, body: credentials.extend({ hash: hashText }), answer: z.strictObject({ releasedAt: momentText }),
  errors: ['wrong-state', 'already-done', 'separation-of-duties', 'signature-refused'],
  example: { params: { studyId: EXAMPLE.id, extractId: EXAMPLE.id }, body: { identifier: 'noor@example.org', password: '…', hash: EXAMPLE.hash } },
})

export const studyEvent = z.strictObject({
  id: uuid,
  kind: z.enum(['database-locked', 'database-unlocked', 'method-fixed', 'blind-broken']),
  extract: z.strictObject({ id: uuid, number: z.number().int() }).nullable(),
  reason: z.string().nullable(),
  by: personView,
  at: momentText,
  signature: signatureView,
})

export const listEventsOperation = defineOperation({
  id: 'events.list', method: 'GET', path: '/api/studies/[studyId]/events', action: 'event.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ events: z.array(studyEvent) }), errors: [], example: { params: { studyId: EXAMPLE.id } },
})

const eventErrors = ['wrong-state', 'already-done', 'queries-open', 'invalid-input', 'signature-refused'] as const
const signed = { identifier: 'mara@example.org', password: '…' }

export const lockDatabaseOperation = defineOperation({
  id: 'events.lock-database', method: 'POST', path: '/api/studies/[studyId]/events/database-locked', action: 'event.lock-database', scope: 'study',
  params: studyParams, query: null, body: credentials.extend({ extractId, reason: reasonText.nullable() }), answer: studyEvent, errors: eventErrors,
  example: { params: { studyId: EXAMPLE.id }, body: { ...signed, extractId: EXAMPLE.id, reason: null } },
})

/** Supersedes the lock, never deletes it. */
export const unlockDatabaseOperation = defineOperation({
  id: 'events.unlock-database', method: 'POST', path: '/api/studies/[studyId]/events/database-unlocked', action: 'event.lock-database', scope: 'study',
  params: studyParams, query: null, body: credentials.extend({ reason: reasonText }), answer: studyEvent, errors: eventErrors,
  example: { params: { studyId: EXAMPLE.id }, body: { ...signed, reason: 'A correction came in.' } },
})

export const fixMethodOperation = defineOperation({
  id: 'events.fix-method', method: 'POST', path: '/api/studies/[studyId]/events/method-fixed', action: 'event.fix-method', scope: 'study',
  params: studyParams, query: null, body: credentials.extend({ reason: reasonText.nullable() }), answer: studyEvent, errors: eventErrors,
  example: { params: { studyId: EXAMPLE.id }, body: { ...signed, reason: null } },
})

/** Before `method fixed` only with a reason. */
export const breakBlindOperation = defineOperation({
  id: 'events.break-blind', method: 'POST', path: '/api/studies/[studyId]/events/blind-broken', action: 'event.break-blind', scope: 'study',
  params: studyParams, query: null, body: credentials.extend({ reason: reasonText.nullable() }), answer: studyEvent, errors: eventErrors,
  example: { params: { studyId: EXAMPLE.id }, body: { ...signed, reason: null } },
})
