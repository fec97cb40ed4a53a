import { z } from 'zod'
import { planSchema } from '../plan/schema'
import { planId } from '../schemas/domainIds'
import { defineOperation } from './operation'
import { credentials, EXAMPLE, hashText, momentText, personView, reasonText, signatureView, studyParams, uuid } from './parts'

const planParams = studyParams.extend({ planId })

const issue = z.strictObject({
  pointer: z.string(),
  code: z.string(),
  params: z.record(z.union([z.string(), z.number(), z.array(z.string())])).optional(),
})

/** What the author declares at signature. */
export const declaration = z.strictObject({
  firstSubjectIn: z.string().date().nullable(),
  dataSeen: z.enum(['none', 'pooled', 'by-arm']),
})

const knowledge = z.strictObject({
  /** Extracts received, verdicts released, and deviations open when the amendment was signed. */
  extractsReceived: z.number().int(),
  verdictsReleased: z.number().int(),
  deviationsOpen: z.number().int(),
  marks: z.array(z.enum(['after-interim-verdicts', 'after-exposure', 'exploratory'])),
})

export const planSummary = z.strictObject({
  id: uuid,
  version: z.number().int(),
  state: z.enum(['draft', 'awaiting-reviewer', 'signed', 'superseded']),
  amends: z.number().int().nullable(),
  amendmentReason: z.string().nullable(),
  author: personView,
  createdAt: momentText,
  signedAt: momentText.nullable(),
  hash: hashText.nullable(),
})

export const planView = planSummary.extend({
  revision: z.number().int(),
  /** The document as far as it is filled in; valid once `issues` is empty. */
  document: z.unknown(),
  issues: z.array(issue),
  needsReviewer: z.boolean(),
  declaration: declaration.nullable(),
  knowledge: knowledge.nullable(),
  signatures: z.array(signatureView),
})
export type PlanView = z.infer<typeof planView>

const planErrors = ['wrong-state', 'exposed', 'separation-of-duties'] as const
const example = { params: { studyId: EXAMPLE.id, planId: EXAMPLE.id } }

export const listPlansOperation = defineOperation({
  id: 'plans.list', method: 'GET', path: '/api/studies/[studyId]/plans', action: 'plan.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ plans: z.array(planSummary) }), errors: [],
  example: { params: { studyId: EXAMPLE.id } },
})

/** A first draft, or an amendment of the version in force, which asks for a reason. */
export const createPlanOperation = defineOperation({
  id: 'plans.create', method: 'POST', path: '/api/studies/[studyId]/plans', action: 'plan.author', scope: 'study',
  params: studyParams, query: null, body: z.strictObject({ amendmentReason: reasonText.nullable(), document: z.unknown().optional() }),
  answer: planView, errors: planErrors, example: { params: { studyId: EXAMPLE.id }, body: { amendmentReason: null } },
})

export const readPlanOperation = defineOperation({
  id: 'plans.read', method: 'GET', path: '/api/studies/[studyId]/plans/[planId]', action: 'plan.read', scope: 'study',
  params: planParams, query: null, body: null, answer: planView, errors: [], example,
})

/** A draft may be incomplete; what it lacks comes back as `issues`. */
export const savePlanOperation = defineOperation({
  id: 'plans.save', method: 'PUT', path: '/api/studies/[studyId]/plans/[planId]', action: 'plan.author', scope: 'study',
  params: planParams, query: null, body: z.strictObject({ document: z.unknown() }), answer: planView, revision: true,
  errors: [...planErrors, 'revision-changed'], example: { ...example, body: { document: {} } },
})

/** The registered document as it was signed: the plan file. */
export const exportPlanOperation = defineOperation({
  id: 'plans.export', method: 'GET', path: '/api/studies/[studyId]/plans/[planId]/document', action: 'plan.read', scope: 'study',
  params: planParams, query: null, body: null, answer: planSchema, errors: ['plan-invalid'], example,
})

export const signPlanAsAuthorOperation = defineOperation({
  id: 'plans.sign-author', method: 'POST', path: '/api/studies/[studyId]/plans/[planId]/author-signature', action: 'plan.sign-author', scope: 'study',
  params: planParams, query: null, body: credentials.extend({ declaration }), answer: planView, revision: true,
  errors: [...planErrors, 'plan-invalid', 'revision-changed', 'signature-refused'],
  example: { ...example, body: { identifier: 'ines@example.org', password: '…', declaration: { firstSubjectIn: null, dataSeen: 'none' } } },
})

/** Approves, where a step changes the question; or sends back to draft with a reason. */
export const reviewPlanOperation = defineOperation({
  id: 'plans.sign-reviewer', method: 'POST', path: '/api/studies/[studyId]/plans/[planId]/reviewer-signature', action: 'plan.sign-reviewer', scope: 'study',
  params: planParams, query: null, body: credentials.extend({ decision: z.enum(['approve', 'return']), reason: reasonText.nullable() }), answer: planView,
  errors: [...planErrors, 'signature-refused'],
  example: { ...example, body: { identifier: 'ines@example.org', password: '…', decision: 'approve', reason: null } },
})
