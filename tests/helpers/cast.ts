import type { StudyRole } from '#shared/access/actions'
import type { MemberId, PersonId, SessionId, StudyId } from '#shared/schemas/ids'
import type { Database } from '../../server/database/client'
import { newId } from '../../server/database/newId'
import { studyMember } from '../../server/database/schema/member'
import { person } from '../../server/database/schema/person'
import { study } from '../../server/database/schema/study'
import { hashPassword } from '../../server/services/passwords'
import { standingOf, type Viewer } from '../../server/services/viewer'

/** Who takes part in a study of a service test, by what they do there. */
const PARTS = {
  author: 'biostatistician',
  reviewer: 'biostatistician',
  third: 'biostatistician',
  dataManager: 'data-manager',
  investigator: 'investigator',
  otherInvestigator: 'investigator',
  monitor: 'monitor',
} as const satisfies Record<string, StudyRole>
export type Part = keyof typeof PARTS

const PASSWORD = 'a phrase of the tests'

export interface Cast {
  readonly studyId: StudyId
  readonly protocolNumber: string
  readonly emailOf: (part: Part) => string
  readonly idOf: (part: Part) => PersonId
  /** As they stand now, with identifier and password for signing. */
  readonly as: (part: Part) => Promise<{ viewer: Viewer, identifier: string, password: string }>
}

let serial = 0

/** A study of its own with one person for each part, written straight into a test's database. */
export async function makeCast(db: Database): Promise<Cast> {
  const protocolNumber = `CAST-${++serial}`
  const studyId = newId<StudyId>()
  await db.insert(study).values({ id: studyId, protocolNumber, title: 'A study of the tests', phase: '2', sponsor: 'Nobody' })
  const passwordHash = await hashPassword(PASSWORD)
  const people = new Map<Part, { id: PersonId, name: string, email: string }>()
  for (const [part, role] of Object.entries(PARTS) as [Part, StudyRole][]) {
    const member = { id: newId<PersonId>(), name: `${part} of ${protocolNumber}`, email: `${part}.${protocolNumber}@example.org`.toLowerCase() }
    await db.insert(person).values({ ...member, passwordHash })
    await db.insert(studyMember).values({ id: newId<MemberId>(), studyId, personId: member.id, role, reason: 'test', grantedBy: member.id })
    people.set(part, member)
  }
  const found = (part: Part) => {
    const member = people.get(part)
    if (!member) throw new Error(`no ${part}`)
    return member
  }
  return {
    studyId,
    protocolNumber,
    emailOf: part => found(part).email,
    idOf: part => found(part).id,
    async as(part) {
      const member = found(part)
      const standing = await standingOf(db, member.id, studyId)
      if (!standing) throw new Error('no such study')
      const viewer: Viewer = { person: member, sessionId: newId<SessionId>(), standing, request: { requestId: newId(), origin: '192.0.2.7' } }
      return { viewer, identifier: member.email, password: PASSWORD }
    },
  }
}
