import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { needsReviewer } from '#shared/plan/changesQuestion'
import { planHash } from '#shared/plan/planHash'
import type { Plan } from '#shared/plan/schema'
import type { PlanId } from '#shared/schemas/domainIds'
import { newId } from '../../../server/database/newId'
import { exposure } from '../../../server/database/schema/member'
import { study } from '../../../server/database/schema/study'
import { larkmoorPlan } from '../../../server/demo/larkmoorPlan'
import { createPlan, savePlan } from '../../../server/services/planDrafts'
import { exportPlan, listPlans, planInForceAt, readPlan } from '../../../server/services/plans'
import { reviewPlan, signPlanAsAuthor } from '../../../server/services/planSignatures'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { serviceStudy, type Part, type ServiceStudy } from '../../helpers/serviceStudy'

let database: TestDatabase
beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

/** A study without any plan yet. */
const planless = () => serviceStudy(database.db, null)
const protocolNumberOf = ({ studyId }: ServiceStudy) => `T-${studyId}`
const untouched = { firstSubjectIn: null, dataSeen: 'none' } as const

/** The demo plan for this study; `plain` leaves out every step that changes the question. */
function documentFor(own: ServiceStudy, { plain = false, blinding = 'blinded' as Plan['blinding'] } = {}): Plan {
  const plan = larkmoorPlan(own.people.investigator.email)
  return {
    ...plan, blinding, protocol: { ...plan.protocol, number: protocolNumberOf(own) },
    analyses: plain ? plan.analyses.filter(({ fallbacks }) => fallbacks.length === 0) : plan.analyses,
  }
}

async function draft(own: ServiceStudy, document: unknown, { part = 'biostatistician' as Part, amendmentReason = null as string | null } = {}) {
  const viewer = await own.as(part)
  return createPlan(database.db, { studyId: own.studyId, amendmentReason, document, viewer })
}

async function signAs(own: ServiceStudy, part: Part, planId: string, revision: number, declaration: Parameters<typeof signPlanAsAuthor>[1]['declaration'] = untouched) {
  return signPlanAsAuthor(database.db, { studyId: own.studyId, planId: planId as PlanId, revision, declaration, ...await own.signing(part) })
}

async function reviewAs(own: ServiceStudy, part: Part, planId: string, decision: 'approve' | 'return' = 'approve', reason: string | null = null) {
  return reviewPlan(database.db, { studyId: own.studyId, planId: planId as PlanId, decision, reason, ...await own.signing(part) })
}

const refused = (code: string) => expect.objectContaining({ code })

async function lockedPlain(own: ServiceStudy) {
  const { id, revision } = await draft(own, documentFor(own, { plain: true }))
  return signAs(own, 'biostatistician', id, revision)
}

describe('drafts', () => {
  it('begin from what every plan has and say what they lack', async () => {
    const own = await planless()
    const view = await draft(own, undefined)
    expect(view).toMatchObject({ version: 1, state: 'draft', revision: 1, hash: null, amends: null, signatures: [] })
    expect(view.document).toMatchObject({ protocol: { number: protocolNumberOf(own) }, blinding: 'blinded' })
    expect(view.issues.map(({ pointer }) => pointer)).toContain('/analyses')
  })

  it('are one at a time, also when two people begin together', async () => {
    const own = await planless()
    const outcomes = await Promise.allSettled([draft(own, undefined), draft(own, undefined, { part: 'second' })])
    expect(outcomes.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected'])
    await expect(draft(own, undefined)).rejects.toThrow(refused('wrong-state'))
  })

  it('are saved under the revision that was read, and refuse another with both named', async () => {
    const own = await planless()
    const { id, revision } = await draft(own, undefined)
    const save = async (given: number) => savePlan(database.db, {
      studyId: own.studyId, planId: id, revision: given, document: documentFor(own), viewer: await own.as('biostatistician'),
    })
    expect(await save(revision)).toMatchObject({ revision: 2, issues: [], needsReviewer: true })
    await expect(save(revision)).rejects.toThrow(expect.objectContaining({ code: 'revision-changed', errors: [expect.objectContaining({ params: { expected: 1, current: 2 } })] }))
  })

  it.each([[null], [[]], ['text'], [{ protocol: { title: 'a\u0000b' } }], [{ title: '\ud800' }]])('refuse %j as a document', async (document) => {
    const own = await planless()
    await expect(draft(own, document)).rejects.toThrow(refused('invalid-input'))
  })

  it('belong to their study alone', async () => {
    const [own, other] = [await planless(), await planless()]
    const { id } = await draft(own, undefined)
    await expect(readPlan(database.db, { studyId: other.studyId, planId: id })).rejects.toThrow(refused('not-found'))
  })

  it('ask an amendment for its reason and a first version for none', async () => {
    const own = await planless()
    await expect(draft(own, undefined, { amendmentReason: 'too early' })).rejects.toThrow(refused('invalid-input'))
    await lockedPlain(own)
    await expect(draft(own, undefined)).rejects.toThrow(refused('invalid-input'))
  })
})

describe('author signature', () => {
  it('fixes bytes and hash and puts a plan that keeps its question in force', async () => {
    const own = await planless()
    const document = documentFor(own, { plain: true })
    expect(needsReviewer(document)).toBe(false)
    const before = new Date(Date.now() - 1000)
    const view = await lockedPlain(own)
    expect(view).toMatchObject({ state: 'signed', hash: planHash(document), knowledge: null, declaration: untouched })
    expect(view.signatures).toEqual([expect.objectContaining({ meaning: 'authored', hash: planHash(document), status: 'valid' })])
    expect(await exportPlan(database.db, { studyId: own.studyId, planId: view.id })).toEqual(document)
    expect(await planInForceAt(database.db, own.studyId, before)).toBeNull()
    expect(await planInForceAt(database.db, own.studyId, new Date(Date.now() + 1000))).toMatchObject({ version: 1, hash: view.hash, document })
  })

  it('asks for a valid plan of this study', async () => {
    const own = await planless()
    const { id, revision } = await draft(own, undefined)
    await expect(signAs(own, 'biostatistician', id, revision)).rejects.toThrow(refused('plan-invalid'))
    const foreign = { ...documentFor(own, { plain: true }), protocol: { number: 'ANOTHER-1', version: '1', title: 'Another' } }
    await savePlan(database.db, { studyId: own.studyId, planId: id, revision, document: foreign, viewer: await own.as('biostatistician') })
    await expect(signAs(own, 'biostatistician', id, revision + 1)).rejects.toThrow(expect.objectContaining({
      code: 'plan-invalid', errors: [expect.objectContaining({ pointer: '/protocol/number', code: 'other-study' })],
    }))
  })

  it('asks for the password again and leaves nothing half done without it', async () => {
    const own = await planless()
    const { id, revision } = await draft(own, documentFor(own, { plain: true }))
    const { viewer, identifier } = await own.signing('biostatistician')
    const attempt = signPlanAsAuthor(database.db, { studyId: own.studyId, planId: id, revision, declaration: untouched, viewer, identifier, password: 'wrong' })
    await expect(attempt).rejects.toThrow(refused('signature-refused'))
    expect(await readPlan(database.db, { studyId: own.studyId, planId: id })).toMatchObject({ state: 'draft', hash: null, signatures: [] })
  })

  it('is refused to whoever declares to have seen data by arm while the blind holds', async () => {
    const own = await planless()
    const { id, revision } = await draft(own, documentFor(own, { plain: true }))
    await expect(signAs(own, 'biostatistician', id, revision, { firstSubjectIn: '2026-01-05', dataSeen: 'by-arm' })).rejects.toThrow(refused('exposed'))
  })

  it.each([['blinded', true], ['open-label', false]] as const)('of a first %s plan says so of the study', async (blinding, blinded) => {
    const own = await planless()
    const { id, revision } = await draft(own, documentFor(own, { plain: true, blinding }))
    await signAs(own, 'biostatistician', id, revision)
    const [row] = await database.db.select({ blinded: study.blinded }).from(study).where(eq(study.id, own.studyId))
    expect(row).toEqual({ blinded })
  })
})

describe('review', () => {
  async function waiting(own: ServiceStudy) {
    const { id, revision } = await draft(own, documentFor(own))
    return signAs(own, 'biostatistician', id, revision)
  }

  it('is awaited where a step changes the question, and puts the plan in force', async () => {
    const own = await planless()
    const view = await waiting(own)
    expect(view).toMatchObject({ state: 'awaiting-reviewer', signedAt: null })
    expect(await planInForceAt(database.db, own.studyId, new Date())).toBeNull()
    const signed = await reviewAs(own, 'second', view.id)
    expect(signed).toMatchObject({ state: 'signed', hash: view.hash })
    expect(signed.signatures.map(({ meaning }) => meaning)).toEqual(['authored', 'reviewed'])
  })

  it('is closed to whoever wrote or saved the version', async () => {
    const own = await planless()
    const { id, revision } = await draft(own, undefined, { part: 'cleared' })
    await savePlan(database.db, { studyId: own.studyId, planId: id, revision, document: documentFor(own), viewer: await own.as('biostatistician') })
    await signAs(own, 'biostatistician', id, revision + 1)
    for (const part of ['biostatistician', 'cleared'] as const) await expect(reviewAs(own, part, id)).rejects.toThrow(refused('separation-of-duties'))
    expect(await reviewAs(own, 'second', id)).toMatchObject({ state: 'signed' })
  })

  it('sends a version back with a reason, which voids the author\'s signature', async () => {
    const own = await planless()
    const { id } = await waiting(own)
    await expect(reviewAs(own, 'second', id, 'return')).rejects.toThrow(refused('invalid-input'))
    const returned = await reviewAs(own, 'second', id, 'return', 'The limit of skewness has no source.')
    expect(returned).toMatchObject({ state: 'draft', hash: null, declaration: null })
    expect(returned.signatures.find(({ meaning }) => meaning === 'authored')).toMatchObject({ status: 'void' })
    await expect(reviewAs(own, 'second', id)).rejects.toThrow(refused('wrong-state'))
  })
})

describe('amendments', () => {
  async function amend(own: ServiceStudy, document: Plan) {
    const { id, revision } = await draft(own, document, { amendmentReason: 'Expected subjects corrected.' })
    return signAs(own, 'biostatistician', id, revision)
  }

  it('supersede the former version in the same breath and leave earlier moments as they were', async () => {
    const own = await planless()
    const first = await lockedPlain(own)
    const moment = new Date()
    await new Promise(resolve => setTimeout(resolve, 20))
    const second = await amend(own, { ...documentFor(own, { plain: true }), decisionPoint: { name: 'Database lock', expectedSubjects: 150 } })
    expect(second).toMatchObject({ version: 2, amends: 1, state: 'signed', knowledge: { extractsReceived: 0, verdictsReleased: 0, deviationsOpen: 0, marks: [] } })
    const { plans } = await listPlans(database.db, { studyId: own.studyId })
    expect(plans.map(({ state }) => state)).toEqual(['superseded', 'signed'])
    expect(await planInForceAt(database.db, own.studyId, moment)).toMatchObject({ id: first.id })
    expect(await planInForceAt(database.db, own.studyId, new Date(Date.now() + 1000))).toMatchObject({ id: second.id })
  })

  it('cannot change whether the study is blinded', async () => {
    const own = await planless()
    await lockedPlain(own)
    await expect(amend(own, documentFor(own, { plain: true, blinding: 'open-label' }))).rejects.toThrow(expect.objectContaining({
      code: 'plan-invalid', errors: [expect.objectContaining({ pointer: '/blinding', code: 'blinding-fixed' })],
    }))
  })

  it('are marked exploratory after the blind was broken, and after exposure of who signs', async () => {
    const own = await planless()
    await lockedPlain(own)
    await database.db.update(study).set({ blindBrokenAt: new Date() }).where(eq(study.id, own.studyId))
    await database.db.insert(exposure).values({ id: newId(), studyId: own.studyId, personId: own.people.biostatistician.id, how: 'arm-level-view', subject: 'test' })
    expect(await amend(own, documentFor(own, { plain: true }))).toMatchObject({ knowledge: { marks: ['after-exposure', 'exploratory'] } })
  })
})
