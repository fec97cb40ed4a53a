import { z } from 'zod'
import { dataQueryId, extractId } from '../schemas/domainIds'
import { defineOperation } from './operation'
import { credentials, EXAMPLE, hashText, momentText, personView, reasonText, signatureView, studyParams, uuid } from './parts'

export const extractParams = studyParams.extend({ extractId })

/** Which column of the file holds what; `flags` names every column that the plan's sets and selections use. */
export const columnMapping = z.strictObject({
  subject: z.array(z.string()).min(1).max(2),
  parameter: z.string().nullable(),
  visit: z.string().nullable(),
  value: z.string(),
  baseline: z.string().nullable(),
  unit: z.string().nullable(),
  site: z.string().nullable(),
  imputed: z.string().nullable(),
  arm: z.string().nullable(),
  flags: z.record(z.string()),
})
export type ColumnMapping = z.infer<typeof columnMapping>

/** A finding about a file: what, where, and what it leads to. Row 1 is the header. */
export const finding = z.strictObject({
  severity: z.enum(['refuse', 'hold', 'warn']),
  code: z.string(),
  row: z.number().int().nullable(),
  column: z.string().nullable(),
  params: z.record(z.union([z.string(), z.number()])),
})
export type Finding = z.infer<typeof finding>

/**
 * `awaiting-mapping`: bytes are kept, columns not yet told; `sealed`: stopped for a column that looks like
 * treatment; `checked` once a report exists.
 */
export const EXTRACT_STATES = ['awaiting-mapping', 'refused', 'sealed', 'awaiting-reason', 'judging', 'checked', 'withdrawn'] as const

export const extractSummary = z.strictObject({
  id: uuid,
  number: z.number().int(),
  fileName: z.string(),
  state: z.enum(EXTRACT_STATES),
  cutOff: z.string(),
  purpose: z.enum(['interim', 'database-lock']),
  standing: z.enum(['look', 're-cut', 'unscheduled', 'decision-point']).nullable(),
  look: z.string().nullable(),
  planVersion: z.number().int(),
  /** In bytes; null like the hash where it would tell how long the names of arms are in sealed bytes. */
  size: z.number().int().nullable(),
  rows: z.number().int().nullable(),
  subjects: z.number().int().nullable(),
  /** Hashes over bytes that contain allocation are shown to cleared members only. */
  bytesHash: hashText.nullable(),
  contentHash: hashText.nullable(),
  uploadedBy: personView,
  receivedAt: momentText,
  findings: z.strictObject({ refuse: z.number().int(), hold: z.number().int(), warn: z.number().int() }),
  openQueries: z.number().int(),
})
export type ExtractSummary = z.infer<typeof extractSummary>

export const dataQuery = z.strictObject({
  id: uuid,
  number: z.number().int(),
  screen: z.string(),
  endpoint: z.string(),
  rows: z.array(z.number().int()),
  count: z.number().int(),
  state: z.enum(['open', 'cleared', 'overruled']),
  openedAt: momentText,
  resolution: z.strictObject({ note: z.string(), signature: signatureView }).nullable(),
})

export const extractView = extractSummary.extend({
  /** Names of the file's columns; empty while sealed. */
  columns: z.array(z.string()),
  mapping: columnMapping.nullable(),
  /** What would be mapped by itself; offered while the mapping is awaited. */
  suggestedMapping: columnMapping.partial().nullable(),
  /** The first rows as they will be read; null while sealed or refused unread. */
  preview: z.array(z.array(z.string())).nullable(),
  findingList: z.array(finding),
  findingsLeftOut: z.number().int(),
  queries: z.array(dataQuery),
  reason: z.strictObject({ text: z.string(), signature: signatureView }).nullable(),
})
export type ExtractView = z.infer<typeof extractView>

const example = { params: { studyId: EXAMPLE.id, extractId: EXAMPLE.id } }
const signed = { identifier: 'mara@example.org', password: '…' }

export const listExtractsOperation = defineOperation({
  id: 'extracts.list', method: 'GET', path: '/api/studies/[studyId]/extracts', action: 'extract.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ extracts: z.array(extractSummary) }), errors: [],
  example: { params: { studyId: EXAMPLE.id } },
})

/** The file is the request body; its name, cut-off date and purpose stand in the query. */
export const uploadExtractOperation = defineOperation({
  id: 'extracts.upload', method: 'POST', path: '/api/studies/[studyId]/extracts', action: 'extract.upload', scope: 'study',
  params: studyParams,
  query: z.strictObject({ fileName: z.string().min(1).max(200), cutOff: z.string().date('not-a-date'), purpose: z.enum(['interim', 'database-lock']) }),
  body: { media: 'upload', types: ['text/csv', 'application/octet-stream'] }, answer: extractView,
  errors: ['plan-not-signed', 'too-large', 'treatment-column', 'invalid-input'],
  example: { params: { studyId: EXAMPLE.id }, query: { fileName: 'adeff.csv', cutOff: '2026-04-02', purpose: 'interim' } },
})

export const readExtractOperation = defineOperation({
  id: 'extracts.read', method: 'GET', path: '/api/studies/[studyId]/extracts/[extractId]', action: 'extract.read', scope: 'study',
  params: extractParams, query: null, body: null, answer: extractView, errors: [], example,
})

/** Tells which column is what; the file is then read whole, and judged unless it is refused. */
export const mapExtractOperation = defineOperation({
  id: 'extracts.map', method: 'PUT', path: '/api/studies/[studyId]/extracts/[extractId]/mapping', action: 'extract.upload', scope: 'study',
  params: extractParams, query: null, body: columnMapping, answer: extractView, errors: ['wrong-state', 'invalid-input'],
  example: { ...example, body: { subject: ['USUBJID'], parameter: 'PARAMCD', visit: 'AVISIT', value: 'AVAL', baseline: null, unit: null, site: null, imputed: null, arm: null, flags: { FASFL: 'FASFL' } } },
})

/** The bytes as received. */
export const downloadExtractOperation = defineOperation({
  id: 'extracts.download', method: 'GET', path: '/api/studies/[studyId]/extracts/[extractId]/bytes', action: 'extract.download', scope: 'study',
  params: extractParams, query: null, body: null, answer: { media: 'file', types: ['application/octet-stream'] }, errors: ['wrong-state'], example,
})

/** An extract outside every window is judged only after a biostatistician who did not upload it signed why. */
export const giveReasonOperation = defineOperation({
  id: 'extracts.give-reason', method: 'POST', path: '/api/studies/[studyId]/extracts/[extractId]/reason', action: 'extract.give-reason', scope: 'study',
  params: extractParams, query: null, body: credentials.extend({ reason: reasonText }), answer: extractView,
  errors: ['wrong-state', 'separation-of-duties', 'signature-refused'], example: { ...example, body: { ...signed, reason: 'Asked for by the data monitoring committee.' } },
})

export const withdrawExtractOperation = defineOperation({
  id: 'extracts.withdraw', method: 'POST', path: '/api/studies/[studyId]/extracts/[extractId]/withdrawal', action: 'extract.withdraw', scope: 'study',
  params: extractParams, query: null, body: credentials.extend({ reason: reasonText }), answer: extractView,
  errors: ['wrong-state', 'signature-refused'], example: { ...example, body: { ...signed, reason: 'Wrong file.' } },
})

export const resolveQueryOperation = defineOperation({
  id: 'queries.resolve', method: 'POST', path: '/api/studies/[studyId]/extracts/[extractId]/queries/[queryId]/resolution', action: 'query.resolve', scope: 'study',
  params: extractParams.extend({ queryId: dataQueryId }), query: null,
  body: credentials.extend({ decision: z.enum(['cleared', 'overruled']), note: reasonText }), answer: extractView,
  errors: ['wrong-state', 'already-done', 'separation-of-duties', 'signature-refused'],
  example: { params: { ...example.params, queryId: EXAMPLE.id }, body: { ...signed, decision: 'cleared', note: 'Confirmed by the site.' } },
})
