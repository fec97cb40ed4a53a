import { and, asc, eq, isNotNull, isNull, sql } from 'drizzle-orm'
import type { InstallationRole, Standing, StudyRole } from '../../shared/access/actions'
import type { PersonId, SessionId, StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { clearance, exposure, studyMember } from '../database/schema/member'
import { person } from '../database/schema/person'
import { study } from '../database/schema/study'
import type { Actor } from './record'

/** What the record keeps of a request. */
export interface RequestFacts {
  readonly requestId: string
  /** Network address. */
  readonly origin: string
}

/** Who asks, with what they hold in the study at hand. */
export interface Viewer {
  readonly person: { readonly id: PersonId, readonly name: string, readonly email: string }
  readonly sessionId: SessionId
  /** Outside a study `studyRoles` is empty and the flags are false. */
  readonly standing: Standing
  readonly request: RequestFacts
}

/** The viewer as the record names who acted: with name and roles as they are now. */
export function actorOf({ person: { id, name }, standing, request }: Viewer): Actor {
  const roles = standing.installationRole ? [standing.installationRole] : standing.studyRoles
  return { personId: id, name, roles: [...roles], ...request }
}

export const outsideStudies = (installationRole: InstallationRole | null): Standing =>
  ({ installationRole, studyRoles: [], cleared: false, exposed: false, blindHolds: false })

/**
 * Studies with what one person holds in each. The subqueries name columns of two joined tables: with a single
 * table Drizzle would leave out the table's name, and they would no longer refer to the outer row.
 */
function standings(db: Queryable, personId: PersonId) {
  const roles = db.select({ role: sql`${studyMember.role}::text` }).from(studyMember)
    .where(and(eq(studyMember.studyId, study.id), eq(studyMember.personId, person.id), isNull(studyMember.until)))
    .orderBy(asc(studyMember.role))
  const clearances = db.select({ id: clearance.id }).from(clearance)
    .where(and(eq(clearance.studyId, study.id), eq(clearance.personId, person.id), isNotNull(clearance.grantedAt), isNull(clearance.endedAt)))
  const exposures = db.select({ id: exposure.id }).from(exposure)
    .where(and(eq(exposure.studyId, study.id), eq(exposure.personId, person.id)))
  return db.select({
    studyId: study.id,
    protocolNumber: study.protocolNumber,
    title: study.title,
    installationRole: person.installationRole,
    studyRoles: sql<StudyRole[]>`array(${roles})`,
    cleared: sql<boolean>`exists(${clearances})`,
    exposed: sql<boolean>`exists(${exposures})`,
    blindHolds: sql<boolean>`(${study.blinded} and ${study.blindBrokenAt} is null)`,
  }).from(study).innerJoin(person, eq(person.id, personId)).$dynamic()
}

/** @returns null when there is no such study or person; a stranger's standing has no roles. */
export async function standingOf(db: Queryable, personId: PersonId, studyId: StudyId): Promise<Standing | null> {
  const [row] = await standings(db, personId).where(eq(study.id, studyId))
  if (!row) return null
  const { installationRole, studyRoles, cleared, exposed, blindHolds } = row
  return { installationRole, studyRoles, cleared, exposed, blindHolds }
}

/** Every study in which the person holds a role, by protocol number. */
export async function membershipsOf(db: Queryable, personId: PersonId) {
  const rows = await standings(db, personId).orderBy(asc(study.protocolNumber))
  return rows
    .filter(row => row.studyRoles.length > 0)
    .map(({ installationRole: _, studyRoles: roles, ...row }) => ({ ...row, roles }))
}
