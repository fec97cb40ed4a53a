import { and, count, eq, inArray, sql } from 'drizzle-orm'
import type { PersonId, StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { release } from '../database/schema/check'
import { deviation } from '../database/schema/deviation'
import { extract } from '../database/schema/extract'
import { exposure } from '../database/schema/member'
import type { PlanKnowledge } from '../database/schema/plan'

export interface KnowledgeOf {
  readonly studyId: StudyId
  /** Everybody whose signature the version carries. */
  readonly signers: readonly PersonId[]
  readonly blindBroken: boolean
  readonly dataSeen: 'none' | 'pooled' | 'by-arm'
}

const numberOf = async (rows: PromiseLike<{ n: number }[]>) => (await rows)[0]?.n ?? 0

/** What had been received, released and seen when an amendment was signed, and the marks that follow from it. */
export async function knowledgeOf(db: Queryable, { studyId, signers, blindBroken, dataSeen }: KnowledgeOf): Promise<PlanKnowledge> {
  const extractsReceived = await numberOf(db.select({ n: count() }).from(extract).where(eq(extract.studyId, studyId)))
  const verdictsReleased = await numberOf(db.select({ n: sql<number>`coalesce(sum(jsonb_array_length(${release.analyses})), 0)::int` })
    .from(release).where(eq(release.studyId, studyId)))
  const deviationsOpen = await numberOf(db.select({ n: count() }).from(deviation)
    .where(and(eq(deviation.studyId, studyId), inArray(deviation.state, ['open', 'under-observation', 'awaiting-second']))))
  const exposed = await numberOf(db.select({ n: count() }).from(exposure)
    .where(and(eq(exposure.studyId, studyId), inArray(exposure.personId, [...signers]))))
  const marks: PlanKnowledge['marks'] = []
  if (verdictsReleased > 0) marks.push('after-interim-verdicts')
  if (exposed > 0 || dataSeen === 'by-arm') marks.push('after-exposure')
  if (blindBroken) marks.push('exploratory')
  return { extractsReceived, verdictsReleased, deviationsOpen, marks }
}
