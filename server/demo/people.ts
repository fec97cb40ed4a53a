import { randomBytes } from 'node:crypto'
import { eq } from 'drizzle-orm'
import type { StudyRole } from '../../shared/access/actions'
import type { PersonId, SessionId, StudyId } from '../../shared/schemas/ids'
import { config } from '../config'
import type { Database } from '../database/client'
import { newId } from '../database/newId'
import { invitation, person } from '../database/schema/person'
import { acceptInvitation, firstAdministratorLink } from '../services/invitations'
import { invitationToken } from '../services/invitationToken'
import { createPerson } from '../services/people'
import { outsideStudies, standingOf, type Viewer } from '../services/viewer'

/** Invented people of an invented company. */
export const CAST = {
  mara: { name: 'Mara Tellander', email: 'mara@larkmoor.example', role: 'data-manager' },
  ines: { name: 'Ines Halloran', email: 'ines@larkmoor.example', role: 'biostatistician' },
  jonas: { name: 'Jonas Weatherby', email: 'jonas@larkmoor.example', role: 'biostatistician' },
  noor: { name: 'Noor Castellane', email: 'noor@larkmoor.example', role: 'biostatistician' },
  tomas: { name: 'Tomas Ravnsborg', email: 'tomas@larkmoor.example', role: 'investigator' },
  sunniva: { name: 'Sunniva Aldershaw', email: 'sunniva@larkmoor.example', role: 'monitor' },
} as const satisfies Record<string, { name: string, email: string, role: StudyRole }>
export type CastName = keyof typeof CAST

export const ADMINISTRATOR = { name: 'Petra Lindmark', email: 'petra@larkmoor.example' } as const

export interface Account {
  readonly id: PersonId
  readonly name: string
  readonly email: string
}

/** Everybody of the demo, with the password that they share on this installation. */
export interface DemoPeople {
  readonly administrator: Account
  readonly cast: Readonly<Record<CastName, Account>>
  readonly password: string
}

const request = () => ({ requestId: newId(), origin: '127.0.0.1' })

/** The administrator at work, outside studies. */
export const administratorView = ({ administrator: { id, name, email } }: DemoPeople): Viewer =>
  ({ person: { id, name, email }, sessionId: newId<SessionId>(), standing: outsideStudies('administrator'), request: request() })

/** One of the cast at work in a study, with what they hold there at this moment. */
export async function viewerIn(db: Database, people: DemoPeople, studyId: StudyId, who: CastName): Promise<Viewer> {
  const { id, name, email } = people.cast[who]
  const standing = await standingOf(db, id, studyId)
  if (!standing) throw new Error(`${who} is not known in the study`)
  return { person: { id, name, email }, sessionId: newId<SessionId>(), standing, request: request() }
}

/** What somebody types into the signing dialog. */
export const credentials = (people: DemoPeople, who: CastName) => ({ identifier: people.cast[who].email, password: people.password })

async function makeAdministrator(db: Database, password: string): Promise<Account> {
  const { origin, secrets: { authSecret } } = config()
  const link = await firstAdministratorLink(db, { origin, authSecret })
  const token = link?.split('/').at(-1)
  if (!token) throw new Error('the database has an administrator already')
  await acceptInvitation(db, { token: decodeURIComponent(token), password, self: ADMINISTRATOR, request: request() })
  const [row] = await db.select({ id: person.id }).from(person).where(eq(person.email, ADMINISTRATOR.email))
  if (!row) throw new Error('no administrator was made')
  return { ...ADMINISTRATOR, id: row.id }
}

async function makeMember(db: Database, viewer: Viewer, { name, email }: { name: string, email: string }, password: string): Promise<Account> {
  const { id } = await createPerson(db, { name, email, installationRole: null, viewer })
  const [open] = await db.select({ id: invitation.id }).from(invitation).where(eq(invitation.personId, id))
  if (!open) throw new Error(`${email} was not invited`)
  await acceptInvitation(db, { token: invitationToken(config().secrets.authSecret, open.id), password, self: null, request: request() })
  return { id, name, email }
}

/** Makes the seven accounts as an administrator would, each taking up their own invitation. */
export async function makePeople(db: Database): Promise<DemoPeople> {
  const password = `leaf-${randomBytes(6).toString('hex')}-stem`
  const administrator = await makeAdministrator(db, password)
  const viewer: Viewer = { person: administrator, sessionId: newId<SessionId>(), standing: outsideStudies('administrator'), request: request() }
  const cast: Partial<Record<CastName, Account>> = {}
  for (const name of Object.keys(CAST) as CastName[]) cast[name] = await makeMember(db, viewer, CAST[name], password)
  return { administrator, cast: cast as Record<CastName, Account>, password }
}
