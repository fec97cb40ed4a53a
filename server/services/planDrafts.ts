import { and, desc, eq, inArray } from 'drizzle-orm'
import type { PlanId } from '../../shared/schemas/domainIds'
import type { PersonId, StudyId } from '../../shared/schemas/ids'
import type { Database, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { plan } from '../database/schema/plan'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import type { PlanAddress } from './plans'
import { planView } from './planView'
import { appendRecord } from './record'
import { startingPlan } from './startingPlan'
import { actorOf, type Viewer } from './viewer'

/** What PostgreSQL cannot keep in JSON: NUL, and halves of surrogate pairs. */
const UNSTORABLE = /(?<!\\)(?:\\\\)*\\u(?:0000|d[89a-f][0-9a-f]{2})/i

/** A draft may be incomplete, but it is an object, and of text that can be stored. */
function storableDocument(document: unknown): object {
  if (typeof document !== 'object' || document === null || Array.isArray(document)) {
    throw new DomainError('invalid-input', [{ pointer: '/document', code: 'wrong-type', params: { expected: 'object' } }])
  }
  if (UNSTORABLE.test(JSON.stringify(document))) throw new DomainError('invalid-input', [{ pointer: '/document', code: 'control-character' }])
  return document
}

interface Basis { readonly amendsId: PlanId | null, readonly document: unknown, readonly version: number }

/**
 * What a new version begins from. The study's row is locked first, so that two people cannot begin one at the
 * same time.
 */
async function basisOf(tx: Transaction, studyId: StudyId): Promise<Basis> {
  const [facts] = await tx.select().from(study).where(eq(study.id, studyId)).for('update')
  if (!facts) throw new DomainError('not-found')
  const versions = await tx.select({ id: plan.id, version: plan.version, state: plan.state, document: plan.document })
    .from(plan).where(eq(plan.studyId, studyId)).orderBy(desc(plan.version))
  if (versions.some(({ state }) => state === 'draft' || state === 'awaiting-reviewer')) {
    throw new DomainError('wrong-state', [{ code: 'draft-exists' }])
  }
  const inForce = versions.find(({ state }) => state === 'signed')
  const version = (versions[0]?.version ?? 0) + 1
  if (inForce) return { amendsId: inForce.id, document: inForce.document, version }
  return { amendsId: null, document: startingPlan(facts), version }
}

function checkReason(amendsId: PlanId | null, reason: string | null): void {
  if (amendsId !== null && reason === null) throw new DomainError('invalid-input', [{ pointer: '/amendmentReason', code: 'required' }])
  if (amendsId === null && reason !== null) throw new DomainError('invalid-input', [{ pointer: '/amendmentReason', code: 'nothing-to-amend' }])
}

export interface CreatePlan {
  readonly studyId: StudyId
  readonly amendmentReason: string | null
  /** A plan file to begin from, in place of the starting document or the version in force. */
  readonly document?: unknown
  readonly viewer: Viewer
}

/** Begins the first draft, or an amendment of the version in force; one version is drafted at a time. */
export async function createPlan(db: Database, { studyId, amendmentReason, document, viewer }: CreatePlan) {
  return await db.transaction(async (tx) => {
    const basis = await basisOf(tx, studyId)
    checkReason(basis.amendsId, amendmentReason)
    const row = onlyRow(await tx.insert(plan).values({
      id: newId<PlanId>(), studyId, version: basis.version, amendsId: basis.amendsId, amendmentReason,
      document: document === undefined ? basis.document : storableDocument(document),
      authorId: viewer.person.id, contributors: [viewer.person.id],
    }).returning())
    const view = await planView(tx, row, { id: viewer.person.id, name: viewer.person.name })
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: basis.amendsId === null ? 'plan.drafted' : 'plan.amendment-drafted', subject: row.id,
      detail: { version: row.version, reason: amendmentReason, imported: document !== undefined },
    })
    return view
  })
}

/** Locks a draft for a change. @throws {DomainError} `not-found`, `wrong-state` once it is signed. */
export async function lockDraft(tx: Transaction, { studyId, planId }: PlanAddress) {
  const [row] = await tx.select().from(plan).where(and(eq(plan.studyId, studyId), eq(plan.id, planId))).for('update')
  if (!row) throw new DomainError('not-found')
  if (row.state !== 'draft') throw new DomainError('wrong-state')
  return row
}

/** @throws {DomainError} `revision-changed` naming both revisions. */
export function checkRevision({ revision }: { readonly revision: number }, expected: number): void {
  if (revision !== expected) {
    throw new DomainError('revision-changed', [{ code: 'revision', params: { expected, current: revision } }])
  }
}

export interface SavePlan extends PlanAddress {
  readonly revision: number
  readonly document?: unknown
  readonly viewer: Viewer
}

/** Saves a draft; whoever saves it last is its author, whoever saved it at all cannot review it. */
export async function savePlan(db: Database, { studyId, planId, revision, document, viewer }: SavePlan) {
  return await db.transaction(async (tx) => {
    const draft = await lockDraft(tx, { studyId, planId })
    checkRevision(draft, revision)
    const contributors: PersonId[] = [...new Set([...draft.contributors, viewer.person.id])]
    const row = onlyRow(await tx.update(plan)
      .set({ document: storableDocument(document), revision: draft.revision + 1, authorId: viewer.person.id, contributors })
      .where(and(eq(plan.id, planId), inArray(plan.state, ['draft']))).returning())
    const view = await planView(tx, row, { id: viewer.person.id, name: viewer.person.name })
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'plan.saved', subject: planId,
      detail: { version: row.version, revision: row.revision, issues: view.issues.length },
    })
    return view
  })
}
