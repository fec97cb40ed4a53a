import { eq } from 'drizzle-orm'
import { needsReviewer } from '../../shared/plan/changesQuestion'
import { parsePlan } from '../../shared/plan/parsePlan'
import type { Queryable } from '../database/client'
import { plan } from '../database/schema/plan'
import { signaturesOver } from './signatures'

type PlanRow = typeof plan.$inferSelect
interface Author { readonly id: string, readonly name: string }

export const summaryOf = (row: PlanRow, author: Author, amends: number | null) => ({
  id: row.id,
  version: row.version,
  state: row.state,
  amends,
  amendmentReason: row.amendmentReason,
  author,
  createdAt: row.createdAt,
  signedAt: row.signedAt,
  hash: row.hash,
})

async function versionOf(db: Queryable, id: PlanRow['amendsId']): Promise<number | null> {
  if (id === null) return null
  const [row] = await db.select({ version: plan.version }).from(plan).where(eq(plan.id, id))
  return row?.version ?? null
}

/** What is still wrong with a draft; a version once signed has nothing left to be said. */
function examine({ state, document }: PlanRow) {
  const parsed = parsePlan(document)
  return {
    issues: state === 'draft' && !parsed.ok ? parsed.issues : [],
    needsReviewer: parsed.ok && needsReviewer(parsed.plan),
  }
}

/** One version with its document, what it lacks, what was declared and known, and who signed. */
export async function planView(db: Queryable, row: PlanRow, author: Author) {
  const signatures = await signaturesOver(db, { studyId: row.studyId, subject: row.id, hash: row.hash })
  return {
    ...summaryOf(row, author, await versionOf(db, row.amendsId)),
    revision: row.revision,
    document: row.document,
    ...examine(row),
    declaration: row.declaration,
    knowledge: row.knowledge,
    signatures,
  }
}
