import { and, eq } from 'drizzle-orm'
import type { Plan } from '../../shared/plan/schema'
import type { DeviationId, ExtractId, MemoId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database } from '../database/client'
import { deviation, memo } from '../database/schema/deviation'
import { acknowledge } from '../services/acknowledgements'
import { uploadAllocation } from '../services/allocations'
import { runCheck } from '../services/checks'
import { grantClearance, proposeClearance } from '../services/clearances'
import { lockDatabase } from '../services/events'
import { uploadExtract } from '../services/extractUpload'
import { grantMember } from '../services/members'
import { readMemo, signMemo } from '../services/memos'
import { createPlan } from '../services/planDrafts'
import { reviewPlan, signPlanAsAuthor } from '../services/planSignatures'
import { previewRelease, signRelease } from '../services/releases'
import { settle } from '../services/settlements'
import { createStudy } from '../services/studies'
import judgeExtract from '../workers/judge'
import { administratorView, CAST, credentials, viewerIn, type CastName, type DemoPeople } from './people'

/** What the story is told with: one step each, by the application's own services. */
export interface Stage {
  readonly db: Database
  readonly people: DemoPeople
  readonly studyId: StudyId
}

async function* once(text: string): AsyncGenerator<Uint8Array> {
  yield new TextEncoder().encode(text)
}

const as = ({ db, people, studyId }: Stage, who: CastName) => viewerIn(db, people, studyId, who)

/** A study with everybody in their role. */
export async function openStudy(db: Database, people: DemoPeople, facts: { protocolNumber: string, title: string, phase: '2' | '3' | 'not-applicable', sponsor: string }): Promise<Stage> {
  const viewer = administratorView(people)
  const { id } = await createStudy(db, { ...facts, demo: true, viewer })
  for (const [name, { role }] of Object.entries(CAST)) {
    await grantMember(db, { studyId: id, personId: people.cast[name as CastName].id, role, reason: 'Named in the delegation log.', viewer })
  }
  return { db, people, studyId: id }
}

/** Ines registers and signs; Jonas reviews where a step changes the question. */
export async function registerPlan(stage: Stage, document: Plan): Promise<void> {
  const { db, people, studyId } = stage
  const author = await as(stage, 'ines')
  const draft = await createPlan(db, { studyId, amendmentReason: null, document, viewer: author })
  const signed = await signPlanAsAuthor(db, {
    studyId, planId: draft.id, revision: draft.revision, declaration: { firstSubjectIn: null, dataSeen: 'none' }, viewer: author, ...credentials(people, 'ines'),
  })
  if (signed.state !== 'awaiting-reviewer') return
  await reviewPlan(db, { studyId, planId: draft.id, decision: 'approve', reason: null, viewer: await as(stage, 'jonas'), ...credentials(people, 'jonas') })
}

/** Ines proposes Noor, Petra grants it. */
export async function clearNoor(stage: Stage): Promise<void> {
  const { db, people, studyId } = stage
  const { id } = await proposeClearance(db, { studyId, personId: people.cast.noor.id, reason: 'Statistician of the independent data centre.', viewer: await as(stage, 'ines') })
  await grantClearance(db, { studyId, clearanceId: id, viewer: administratorView(people) })
}

/** Mara brings a file in; it is judged at once, the worker's own job then finds nothing left to do. */
export async function bringIn(stage: Stage, file: { name: string, cutOff: string, purpose: 'interim' | 'database-lock', content: string }): Promise<ExtractId> {
  const { db, studyId } = stage
  const { id } = await uploadExtract(db, { studyId, fileName: file.name, cutOff: file.cutOff, purpose: file.purpose, source: once(file.content), viewer: await as(stage, 'mara') })
  await judgeNow(stage, id)
  return id
}

export const judgeNow = ({ db, studyId }: Stage, extractId: ExtractId): Promise<void> =>
  runCheck(db, { studyId, extractId }, task => Promise.resolve(judgeExtract(task)))

export async function sealAllocation(stage: Stage, content: string): Promise<void> {
  await uploadAllocation(stage.db, { studyId: stage.studyId, kind: 'true', source: once(content), viewer: await as(stage, 'noor') })
}

/** Noor reads what the others will see and releases exactly that. */
export async function releaseVerdicts(stage: Stage, extractId: ExtractId): Promise<void> {
  const { db, people, studyId } = stage
  const viewer = await as(stage, 'noor')
  const { hash } = await previewRelease(db, { studyId, extractId, viewer })
  await signRelease(db, { studyId, extractId, hash, viewer, ...credentials(people, 'noor') })
}

export async function lock(stage: Stage, extractId: ExtractId): Promise<void> {
  await lockDatabase(stage.db, { studyId: stage.studyId, extractId, reason: null, viewer: await as(stage, 'mara'), ...credentials(stage.people, 'mara') })
}

async function deviationOf({ db, studyId }: Stage, analysis: string): Promise<DeviationId> {
  const [row] = await db.select({ id: deviation.id }).from(deviation).where(and(eq(deviation.studyId, studyId), eq(deviation.analysis, analysis)))
  if (!row) throw new Error(`no deviation of ${analysis}`)
  return row.id
}

export async function acknowledgeBy(stage: Stage, analysis: string, comment: string | null): Promise<void> {
  await acknowledge(stage.db, {
    studyId: stage.studyId, deviationId: await deviationOf(stage, analysis), decision: 'acknowledged', comment, viewer: await as(stage, 'tomas'), ...credentials(stage.people, 'tomas'),
  })
}

/** Jonas settles by the registered step and signs the memo; a worker makes the document. */
export async function settleAndSign(stage: Stage, analysis: string, note: string): Promise<void> {
  const { db, people, studyId } = stage
  const viewer = await as(stage, 'jonas')
  const deviationId = await deviationOf(stage, analysis)
  await settle(db, { studyId, deviationId, kind: 'accept-step', note, viewer, ...credentials(people, 'jonas') })
  const [row] = await db.select({ id: memo.id }).from(memo).where(and(eq(memo.studyId, studyId), eq(memo.deviationId, deviationId)))
  if (!row) throw new Error(`no memo of ${analysis}`)
  const memoId: MemoId = row.id
  const { contentHash } = await readMemo(db, { studyId, memoId })
  await signMemo(db, { studyId, memoId, contentHash, viewer, ...credentials(people, 'jonas') })
}
