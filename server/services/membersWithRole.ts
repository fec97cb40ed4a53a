import { and, asc, eq, isNull } from 'drizzle-orm'
import type { StudyRole } from '../../shared/access/actions'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { studyMember } from '../database/schema/member'
import { person } from '../database/schema/person'

/** Members who hold a role of the study now and whose account is open. */
export const membersWithRole = (db: Queryable, studyId: StudyId, role: StudyRole) =>
  db.selectDistinct({ id: person.id, name: person.name, email: person.email }).from(studyMember)
    .innerJoin(person, eq(person.id, studyMember.personId))
    .where(and(eq(studyMember.studyId, studyId), eq(studyMember.role, role), isNull(studyMember.until), isNull(person.deactivatedAt)))
    .orderBy(asc(person.name))
