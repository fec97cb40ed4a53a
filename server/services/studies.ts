import { asc, eq } from 'drizzle-orm'
import type { StudyId } from '../../shared/schemas/ids'
import type { StudyPhase } from '../../shared/schemas/study'
import type { Database, Queryable } from '../database/client'
import { violatesUnique } from '../database/failures'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { study } from '../database/schema/study'
import { DomainError } from '../domainError'
import { appendRecord } from './record'
import { actorOf, membershipsOf, type Viewer } from './viewer'

export interface CreateStudy {
  readonly protocolNumber: string
  readonly title: string
  readonly phase: StudyPhase
  readonly sponsor: string
  /** Invented content, marked on every page. */
  readonly demo?: boolean
  readonly viewer: Viewer
}

/** Registers a study; people are admitted to it one by one, and it counts as blinded until a plan says otherwise. */
export async function createStudy(db: Database, { viewer, ...facts }: CreateStudy) {
  const id = newId<StudyId>()
  try {
    return await db.transaction(async (tx) => {
      const created = onlyRow(await tx.insert(study).values({ id, ...facts }).returning())
      const { protocolNumber, title, phase, sponsor } = facts
      await appendRecord(tx, {
        chain: { studyId: id }, actor: actorOf(viewer), action: 'study.created', subject: id, detail: { protocolNumber, title, phase, sponsor },
      })
      return created
    })
  }
  catch (error) {
    if (violatesUnique(error, 'study_protocol_number_unique')) {
      throw new DomainError('already-done', [{ pointer: '/protocolNumber', code: 'protocol-number-taken' }])
    }
    throw error
  }
}

/** Every study for an administrator, for everybody else those in which they hold a role. */
export async function listStudies(db: Queryable, { viewer }: { viewer: Viewer }) {
  const all = await db.select().from(study).orderBy(asc(study.protocolNumber))
  const memberships = new Map((await membershipsOf(db, viewer.person.id)).map(({ studyId, roles }) => [studyId, roles]))
  const seesAll = viewer.standing.installationRole === 'administrator'
  return {
    studies: all
      .filter(({ id }) => seesAll || memberships.has(id))
      .map(row => ({ ...row, roles: memberships.get(row.id) ?? [] })),
  }
}

export async function readStudy(db: Queryable, { studyId }: { studyId: StudyId }) {
  const [found] = await db.select().from(study).where(eq(study.id, studyId))
  if (!found) throw new DomainError('not-found')
  return found
}
