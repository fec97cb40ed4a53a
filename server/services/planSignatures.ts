import { and, eq, sql } from 'drizzle-orm'
import { needsReviewer } from '../../shared/plan/changesQuestion'
import { parsePlan } from '../../shared/plan/parsePlan'
import { planBytes, planHash } from '../../shared/plan/planHash'
import type { Plan } from '../../shared/plan/schema'
import type { PersonId, StudyId } from '../../shared/schemas/ids'
import type { Database, Transaction } from '../database/client'
import { onlyRow } from '../database/onlyRow'
import { person } from '../database/schema/person'
import { plan } from '../database/schema/plan'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { checkRevision, lockDraft } from './planDrafts'
import { knowledgeOf } from './planKnowledge'
import { readSignedPlan, type PlanAddress } from './plans'
import { planView } from './planView'
import { notify } from './notices'
import { appendRecord } from './record'
import { requireSeparation } from './separation'
import { sign, type Credentials } from './signatures'
import { actorOf, type Viewer } from './viewer'

type PlanRow = typeof plan.$inferSelect
type StudyRow = typeof study.$inferSelect
type Declaration = NonNullable<PlanRow['declaration']>

async function lockStudy(tx: Transaction, studyId: StudyId): Promise<StudyRow> {
  const [row] = await tx.select().from(study).where(eq(study.id, studyId)).for('update')
  if (!row) throw new DomainError('not-found')
  return row
}

/** The draft as a plan that may be signed in this study. @throws {DomainError} `plan-invalid` with its issues. */
async function signablePlan(tx: Transaction, draft: PlanRow, { protocolNumber }: StudyRow): Promise<Plan> {
  const parsed = parsePlan(draft.document)
  if (!parsed.ok) throw new DomainError('plan-invalid', parsed.issues)
  const { plan: document } = parsed
  if (document.protocol.number !== protocolNumber) {
    throw new DomainError('plan-invalid', [{ pointer: '/protocol/number', code: 'other-study', params: { expected: protocolNumber } }])
  }
  if (draft.amendsId !== null) {
    const former = await readSignedPlan(tx, { studyId: draft.studyId, planId: draft.amendsId })
    if (former.document.blinding !== document.blinding) throw new DomainError('plan-invalid', [{ pointer: '/blinding', code: 'blinding-fixed' }])
  }
  return document
}

/** Who declares to have seen data by arm is exposed, and exposed people author nothing while the blind holds. */
function checkDeclaration({ dataSeen }: Declaration, document: Plan, { blindBrokenAt }: StudyRow): void {
  if (dataSeen === 'by-arm' && document.blinding === 'blinded' && blindBrokenAt === null) throw new DomainError('exposed')
}

interface Locking { readonly row: PlanRow, readonly study: StudyRow, readonly signers: readonly PersonId[], readonly declaration: Declaration }

/** Puts a version in force: it supersedes the former one, and the first fixes whether the study is blinded. */
async function lockPlan(tx: Transaction, { row, study: { blindBrokenAt }, signers, declaration }: Locking): Promise<PlanRow> {
  const { studyId } = row
  const knowledge = row.amendsId === null
    ? null
    : await knowledgeOf(tx, { studyId, signers, blindBroken: blindBrokenAt !== null, dataSeen: declaration.dataSeen })
  await tx.update(plan).set({ state: 'superseded' }).where(and(eq(plan.studyId, studyId), eq(plan.state, 'signed')))
  const locked = onlyRow(await tx.update(plan).set({ state: 'signed', signedAt: sql`now()`, knowledge }).where(eq(plan.id, row.id)).returning())
  const { document } = await readSignedPlan(tx, { studyId, planId: row.id })
  if (row.amendsId === null) await tx.update(study).set({ blinded: document.blinding === 'blinded' }).where(eq(study.id, studyId))
  return locked
}

export interface SignPlanAsAuthor extends PlanAddress, Credentials {
  readonly revision: number
  readonly declaration: Declaration
  readonly viewer: Viewer
}

/**
 * The author's signature fixes the canonical bytes and their hash. Where a step changes the question the
 * version then waits for a reviewer, else it is in force at once.
 */
export async function signPlanAsAuthor(db: Database, { studyId, planId, revision, declaration, viewer, identifier, password }: SignPlanAsAuthor) {
  return await db.transaction(async (tx) => {
    const facts = await lockStudy(tx, studyId)
    const draft = await lockDraft(tx, { studyId, planId })
    checkRevision(draft, revision)
    const document = await signablePlan(tx, draft, facts)
    checkDeclaration(declaration, document, facts)
    const hash = planHash(document)
    await sign(tx, { studyId, viewer, identifier, password, meaning: 'authored', subject: planId, hash })
    const contributors: PersonId[] = [...new Set([...draft.contributors, viewer.person.id])]
    const awaits = needsReviewer(document)
    const signed = onlyRow(await tx.update(plan).set({
      document, bytes: planBytes(document), hash, declaration, contributors, authorId: viewer.person.id, revision: draft.revision + 1,
      ...(awaits ? { state: 'awaiting-reviewer' as const } : {}),
    }).where(eq(plan.id, planId)).returning())
    const row = awaits ? signed : await lockPlan(tx, { row: signed, study: facts, signers: [viewer.person.id], declaration })
    const view = await planView(tx, row, { id: viewer.person.id, name: viewer.person.name })
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: awaits ? 'plan.author-signed' : 'plan.locked', subject: planId,
      detail: { version: row.version, hash, firstSubjectIn: declaration.firstSubjectIn, dataSeen: declaration.dataSeen, marks: row.knowledge?.marks.join(' ') ?? null },
    })
    await notify(tx, { studyId, kind: 'plan', id: planId })
    return view
  })
}

export interface ReviewPlan extends PlanAddress, Credentials {
  readonly decision: 'approve' | 'return'
  readonly reason: string | null
  readonly viewer: Viewer
}

async function awaitingReview(tx: Transaction, { studyId, planId }: PlanAddress) {
  const [row] = await tx.select().from(plan).where(and(eq(plan.studyId, studyId), eq(plan.id, planId))).for('update')
  if (!row) throw new DomainError('not-found')
  const { state, hash, declaration } = row
  if (state !== 'awaiting-reviewer' || hash === null || declaration === null) throw new DomainError('wrong-state')
  return { row, hash, declaration }
}

/** Back to draft: what was signed no longer stands, so the author's signature is shown as void from here on. */
const returnToDraft = async (tx: Transaction, row: PlanRow) => onlyRow(await tx.update(plan)
  .set({ state: 'draft', bytes: null, hash: null, declaration: null, revision: row.revision + 1 }).where(eq(plan.id, row.id)).returning())

/** The second signature of a version with a step that changes the question: puts it in force, or sends it back with a reason. */
export async function reviewPlan(db: Database, { studyId, planId, decision, reason, viewer, identifier, password }: ReviewPlan) {
  if (decision === 'return' && (reason === null || reason.trim() === '')) throw new DomainError('invalid-input', [{ pointer: '/reason', code: 'required' }])
  return await db.transaction(async (tx) => {
    const facts = await lockStudy(tx, studyId)
    const { row: waiting, hash, declaration } = await awaitingReview(tx, { studyId, planId })
    requireSeparation('plan.sign-reviewer', viewer.person.id, { 'plan.author': waiting.contributors })
    const meaning = decision === 'approve' ? 'reviewed' : 'returned'
    await sign(tx, { studyId, viewer, identifier, password, meaning, subject: planId, hash, reason })
    const row = decision === 'return'
      ? await returnToDraft(tx, waiting)
      : await lockPlan(tx, { row: waiting, study: facts, signers: [waiting.authorId, viewer.person.id], declaration })
    const author = onlyRow(await tx.select({ id: person.id, name: person.name }).from(person).where(eq(person.id, row.authorId)))
    const view = await planView(tx, row, author)
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: decision === 'approve' ? 'plan.locked' : 'plan.returned', subject: planId,
      detail: { version: row.version, hash, reason, marks: row.knowledge?.marks.join(' ') ?? null },
    })
    await notify(tx, { studyId, kind: 'plan', id: planId })
    return view
  })
}
