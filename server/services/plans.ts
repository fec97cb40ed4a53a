import { and, asc, desc, eq, inArray, lte } from 'drizzle-orm'
import { parsePlan } from '../../shared/plan/parsePlan'
import { planSchema, type Plan } from '../../shared/plan/schema'
import type { PlanId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { person } from '../database/schema/person'
import { plan } from '../database/schema/plan'
import { DomainError } from '../domainError'
import { planView, summaryOf } from './planView'

export interface PlanAddress { readonly studyId: StudyId, readonly planId: PlanId }

/** A fully signed version, as it was signed. */
export interface SignedPlan {
  readonly id: PlanId
  readonly version: number
  readonly hash: string
  readonly signedAt: Date
  readonly document: Plan
}

const withAuthor = (db: Queryable) => db.select({ row: plan, author: { id: person.id, name: person.name } })
  .from(plan).innerJoin(person, eq(person.id, plan.authorId))

/** What was signed is read by its shape alone: rules that a later release adds do not undo a signature. */
const readSignedDocument = (bytes: Uint8Array): Plan => planSchema.parse(JSON.parse(Buffer.from(bytes).toString('utf8')))

function signedPlanOf(row: typeof plan.$inferSelect): SignedPlan {
  if (row.hash === null || row.signedAt === null || row.bytes === null) throw new DomainError('internal')
  return { id: row.id, version: row.version, hash: row.hash, signedAt: row.signedAt, document: readSignedDocument(row.bytes) }
}

/** The last version that had been fully signed at a moment; null when there was none. */
export async function planInForceAt(db: Queryable, studyId: StudyId, moment: Date): Promise<SignedPlan | null> {
  const [row] = await db.select().from(plan)
    .where(and(eq(plan.studyId, studyId), inArray(plan.state, ['signed', 'superseded']), lte(plan.signedAt, moment)))
    .orderBy(desc(plan.signedAt), desc(plan.version)).limit(1)
  return row ? signedPlanOf(row) : null
}

/** A signed or superseded version by its id. */
export async function readSignedPlan(db: Queryable, { studyId, planId }: PlanAddress): Promise<SignedPlan> {
  const [row] = await db.select().from(plan).where(and(eq(plan.studyId, studyId), eq(plan.id, planId)))
  if (!row) throw new DomainError('not-found')
  if (row.state !== 'signed' && row.state !== 'superseded') throw new DomainError('wrong-state')
  return signedPlanOf(row)
}

/** Every version that is or was in force, by id. */
export async function signedPlans(db: Queryable, studyId: StudyId): Promise<ReadonlyMap<PlanId, SignedPlan>> {
  const rows = await db.select().from(plan).where(and(eq(plan.studyId, studyId), inArray(plan.state, ['signed', 'superseded'])))
  return new Map(rows.map(row => [row.id, signedPlanOf(row)]))
}

export async function listPlans(db: Queryable, { studyId }: { studyId: StudyId }) {
  const found = await withAuthor(db).where(eq(plan.studyId, studyId)).orderBy(asc(plan.version))
  const versions = new Map(found.map(({ row }) => [row.id, row.version]))
  return { plans: found.map(({ row, author }) => summaryOf(row, author, row.amendsId === null ? null : versions.get(row.amendsId) ?? null)) }
}

export async function readPlan(db: Queryable, { studyId, planId }: PlanAddress) {
  const [found] = await withAuthor(db).where(and(eq(plan.studyId, studyId), eq(plan.id, planId)))
  if (!found) throw new DomainError('not-found')
  return planView(db, found.row, found.author)
}

/** The plan file: a draft only once it is valid. */
export async function exportPlan(db: Queryable, { studyId, planId }: PlanAddress): Promise<Plan> {
  const [row] = await db.select().from(plan).where(and(eq(plan.studyId, studyId), eq(plan.id, planId)))
  if (!row) throw new DomainError('not-found')
  if (row.bytes !== null) return readSignedDocument(row.bytes)
  const parsed = parsePlan(row.document)
  if (!parsed.ok) throw new DomainError('plan-invalid', parsed.issues)
  return parsed.plan
}
