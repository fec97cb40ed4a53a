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
import { makeCast, type Cast, type Part } from '../../helpers/cast'
import { freshDatabase, type TestDatabase } from '../../helpers/database'

let database: TestDatabase
beforeAll(async () => {
  database = await freshDatabase()
})
afterAll(() => database.drop())

const untouched = { firstSubjectIn: null, dataSeen: 'none' } as const

/** The demo plan for this study; `plain` leaves out every step that changes the question. */
function documentFor(cast: Cast, { plain = false, blinding = 'blinded' as Plan['blinding'] } = {}): Plan {
  const plan = larkmoorPlan(cast.emailOf('investigator'))
  return {
    ...plan, blinding, protocol: { ...plan.protocol, number: cast.protocolNumber },
    analyses: plain ? plan.analyses.filter(({ fallbacks }) => fallbacks.length === 0) : plan.analyses,
  }
}

async function draft(cast: Cast, document: unknown, { part = 'author' as Part, amendmentReason = null as string | null } = {}) {
  const { viewer } = await cast.as(part)
  return createPlan(database.db, { studyId: cast.studyId, amendmentReason, document, viewer })
}

async function signAs(cast: Cast, part: Part, planId: string, revision: number, declaration: Parameters<typeof signPlanAsAuthor>[1]['declaration'] = untouched) {
  return signPlanAsAuthor(database.db, { studyId: cast.studyId, planId: planId as PlanId, revision, declaration, ...await cast.as(part) })
}

async function reviewAs(cast: Cast, part: Part, planId: string, decision: 'approve' | 'return' = 'approve', reason: string | null = null) {
  return reviewPlan(database.db, { studyId: cast.studyId, planId: planId as PlanId, decision, reason, ...await cast.as(part) })
}

const refused = (code: string) => expect.objectContaining({ code })

async function lockedPlain(cast: Cast) {
  const { id, revision } = await draft(cast, documentFor(cast, { plain: true }))
  return signAs(cast, 'author', id, revision)
}

describe('drafts', () => {
  it('begin from what every plan has and say what they lack', async () => {
    const cast = await makeCast(database.db)
    const view = await draft(cast, undefined)
    expect(view).toMatchObject({ version: 1, state: 'draft', revision: 1, hash: null, amends: null, signatures: [] })
    expect(view.document).toMatchObject({ protocol: { number: cast.protocolNumber }, blinding: 'blinded' })
    expect(view.issues.map(({ pointer }) => pointer)).toContain('/analyses')
  })

  it('are one at a time, also when two people begin together', async () => {
    const cast = await makeCast(database.db)
    const outcomes = await Promise.allSettled([draft(cast, undefined), draft(cast, undefined, { part: 'reviewer' })])
    expect(outcomes.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected'])
    await expect(draft(cast, undefined)).rejects.toThrow(refused('wrong-state'))
  })

  it('are saved under the revision that was read, and refuse another with both named', async () => {
    const cast = await makeCast(database.db)
    const { id, revision } = await draft(cast, undefined)
    const save = async (given: number) => savePlan(database.db, {
      studyId: cast.studyId, planId: id, revision: given, document: documentFor(cast), viewer: (await cast.as('author')).viewer,
    })
    expect(await save(revision)).toMatchObject({ revision: 2, issues: [], needsReviewer: true })
    await expect(save(revision)).rejects.toThrow(expect.objectContaining({ code: 'revision-changed', errors: [expect.objectContaining({ params: { expected: 1, current: 2 } })] }))
  })

  it.each([[null], [[]], ['text'], [{ protocol: { title: 'a\u0000b' } }], [{ title: '\ud800' }]])('refuse %j as a document', async (document) => {
    const cast = await makeCast(database.db)
    await expect(draft(cast, document)).rejects.toThrow(refused('invalid-input'))
  })

  it('belong to their study alone', async () => {
    const [own, other] = [await makeCast(database.db), await makeCast(database.db)]
    const { id } = await draft(own, undefined)
    await expect(readPlan(database.db, { studyId: other.studyId, planId: id })).rejects.toThrow(refused('not-found'))
  })

  it('ask an amendment for its reason and a first version for none', async () => {
    const cast = await makeCast(database.db)
    await expect(draft(cast, undefined, { amendmentReason: 'too early' })).rejects.toThrow(refused('invalid-input'))
    await lockedPlain(cast)
    await expect(draft(cast, undefined)).rejects.toThrow(refused('invalid-input'))
  })
})

describe('author signature', () => {
  it('fixes bytes and hash and puts a plan that keeps its question in force', async () => {
    const cast = await makeCast(database.db)
    const document = documentFor(cast, { plain: true })
    expect(needsReviewer(document)).toBe(false)
    const before = new Date(Date.now() - 1000)
    const view = await lockedPlain(cast)
    expect(view).toMatchObject({ state: 'signed', hash: planHash(document), knowledge: null, declaration: untouched })
    expect(view.signatures).toEqual([expect.objectContaining({ meaning: 'authored', hash: planHash(document), status: 'valid' })])
    expect(await exportPlan(database.db, { studyId: cast.studyId, planId: view.id })).toEqual(document)
    expect(await planInForceAt(database.db, cast.studyId, before)).toBeNull()
    expect(await planInForceAt(database.db, cast.studyId, new Date(Date.now() + 1000))).toMatchObject({ version: 1, hash: view.hash, document })
  })

  it('asks for a valid plan of this study', async () => {
    const cast = await makeCast(database.db)
    const { id, revision } = await draft(cast, undefined)
    await expect(signAs(cast, 'author', id, revision)).rejects.toThrow(refused('plan-invalid'))
    const foreign = { ...documentFor(cast, { plain: true }), protocol: { number: 'ANOTHER-1', version: '1', title: 'Another' } }
    await savePlan(database.db, { studyId: cast.studyId, planId: id, revision, document: foreign, viewer: (await cast.as('author')).viewer })
    await expect(signAs(cast, 'author', id, revision + 1)).rejects.toThrow(expect.objectContaining({
      code: 'plan-invalid', errors: [expect.objectContaining({ pointer: '/protocol/number', code: 'other-study' })],
    }))
  })

  it('asks for the password again and leaves nothing half done without it', async () => {
    const cast = await makeCast(database.db)
    const { id, revision } = await draft(cast, documentFor(cast, { plain: true }))
    const { viewer, identifier } = await cast.as('author')
    const attempt = signPlanAsAuthor(database.db, { studyId: cast.studyId, planId: id, revision, declaration: untouched, viewer, identifier, password: 'wrong' })
    await expect(attempt).rejects.toThrow(refused('signature-refused'))
    expect(await readPlan(database.db, { studyId: cast.studyId, planId: id })).toMatchObject({ state: 'draft', hash: null, signatures: [] })
  })

  it('is refused to whoever declares to have seen data by arm while the blind holds', async () => {
    const cast = await makeCast(database.db)
    const { id, revision } = await draft(cast, documentFor(cast, { plain: true }))
    await expect(signAs(cast, 'author', id, revision, { firstSubjectIn: '2026-01-05', dataSeen: 'by-arm' })).rejects.toThrow(refused('exposed'))
  })

  it.each([['blinded', true], ['open-label', false]] as const)('of a first %s plan says so of the study', async (blinding, blinded) => {
    const cast = await makeCast(database.db)
    const { id, revision } = await draft(cast, documentFor(cast, { plain: true, blinding }))
    await signAs(cast, 'author', id, revision)
    const [row] = await database.db.select({ blinded: study.blinded }).from(study).where(eq(study.id, cast.studyId))
    expect(row).toEqual({ blinded })
  })
})

describe('review', () => {
  async function waiting(cast: Cast) {
    const { id, revision } = await draft(cast, documentFor(cast))
    return signAs(cast, 'author', id, revision)
  }

  it('is awaited where a step changes the question, and puts the plan in force', async () => {
    const cast = await makeCast(database.db)
    const view = await waiting(cast)
    expect(view).toMatchObject({ state: 'awaiting-reviewer', signedAt: null })
    expect(await planInForceAt(database.db, cast.studyId, new Date())).toBeNull()
    const signed = await reviewAs(cast, 'reviewer', view.id)
    expect(signed).toMatchObject({ state: 'signed', hash: view.hash })
    expect(signed.signatures.map(({ meaning }) => meaning)).toEqual(['authored', 'reviewed'])
  })

  it('is closed to whoever wrote or saved the version', async () => {
    const cast = await makeCast(database.db)
    const { id, revision } = await draft(cast, undefined, { part: 'third' })
    await savePlan(database.db, { studyId: cast.studyId, planId: id, revision, document: documentFor(cast), viewer: (await cast.as('author')).viewer })
    await signAs(cast, 'author', id, revision + 1)
    for (const part of ['author', 'third'] as const) await expect(reviewAs(cast, part, id)).rejects.toThrow(refused('separation-of-duties'))
    expect(await reviewAs(cast, 'reviewer', id)).toMatchObject({ state: 'signed' })
  })

  it('sends a version back with a reason, which voids the author\'s signature', async () => {
    const cast = await makeCast(database.db)
    const { id } = await waiting(cast)
    await expect(reviewAs(cast, 'reviewer', id, 'return')).rejects.toThrow(refused('invalid-input'))
    const returned = await reviewAs(cast, 'reviewer', id, 'return', 'The limit of skewness has no source.')
    expect(returned).toMatchObject({ state: 'draft', hash: null, declaration: null })
    expect(returned.signatures.find(({ meaning }) => meaning === 'authored')).toMatchObject({ status: 'void' })
    await expect(reviewAs(cast, 'reviewer', id)).rejects.toThrow(refused('wrong-state'))
  })
})

describe('amendments', () => {
  async function amend(cast: Cast, document: Plan) {
    const { id, revision } = await draft(cast, document, { amendmentReason: 'Expected subjects corrected.' })
    return signAs(cast, 'author', id, revision)
  }

  it('supersede the former version in the same breath and leave earlier moments as they were', async () => {
    const cast = await makeCast(database.db)
    const first = await lockedPlain(cast)
    const moment = new Date()
    await new Promise(resolve => setTimeout(resolve, 20))
    const second = await amend(cast, { ...documentFor(cast, { plain: true }), decisionPoint: { name: 'Database lock', expectedSubjects: 150 } })
    expect(second).toMatchObject({ version: 2, amends: 1, state: 'signed', knowledge: { extractsReceived: 0, verdictsReleased: 0, deviationsOpen: 0, marks: [] } })
    const { plans } = await listPlans(database.db, { studyId: cast.studyId })
    expect(plans.map(({ state }) => state)).toEqual(['superseded', 'signed'])
    expect(await planInForceAt(database.db, cast.studyId, moment)).toMatchObject({ id: first.id })
    expect(await planInForceAt(database.db, cast.studyId, new Date(Date.now() + 1000))).toMatchObject({ id: second.id })
  })

  it('cannot change whether the study is blinded', async () => {
    const cast = await makeCast(database.db)
    await lockedPlain(cast)
    await expect(amend(cast, documentFor(cast, { plain: true, blinding: 'open-label' }))).rejects.toThrow(expect.objectContaining({
      code: 'plan-invalid', errors: [expect.objectContaining({ pointer: '/blinding', code: 'blinding-fixed' })],
    }))
  })

  it('are marked exploratory after the blind was broken, and after exposure of who signs', async () => {
    const cast = await makeCast(database.db)
    await lockedPlain(cast)
    await database.db.update(study).set({ blindBrokenAt: new Date() }).where(eq(study.id, cast.studyId))
    await database.db.insert(exposure).values({ id: newId(), studyId: cast.studyId, personId: cast.idOf('author'), how: 'arm-level-view', subject: 'test' })
    expect(await amend(cast, documentFor(cast, { plain: true }))).toMatchObject({ knowledge: { marks: ['after-exposure', 'exploratory'] } })
  })
})
