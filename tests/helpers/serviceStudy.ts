import { hash } from '@node-rs/argon2'
import { randomUUID } from 'node:crypto'
import { Readable } from 'node:stream'
import { sql } from 'drizzle-orm'
import type { StudyRole } from '#shared/access/actions'
import { planBytes, planHash } from '#shared/plan/planHash'
import type { Plan } from '#shared/plan/schema'
import type { ExtractId, PlanId } from '#shared/schemas/domainIds'
import type { PersonId, SessionId, StudyId } from '#shared/schemas/ids'
import type { Database } from '../../server/database/client'
import { newId } from '../../server/database/newId'
import { clearance, studyMember } from '../../server/database/schema/member'
import { person } from '../../server/database/schema/person'
import { plan as planTable } from '../../server/database/schema/plan'
import { study } from '../../server/database/schema/study'
import { uploadAllocation } from '../../server/services/allocations'
import { runCheck } from '../../server/services/checks'
import { uploadExtract } from '../../server/services/extractUpload'
import { standingOf, type Viewer } from '../../server/services/viewer'
import judgeExtract from '../../server/workers/judge'
import { trialPlan } from './trial'

/** Services read the configuration; what a test of them has no server for may be anything well-formed. */
const UNUSED = { STIPULE_ORIGIN: 'http://127.0.0.1:3000', AUTH_ORIGIN: 'http://127.0.0.1:3000/api/auth', STIPULE_SMTP_URL: 'smtp://127.0.0.1:2525', STIPULE_MAIL_FROM: 'nobody@example.org' }
for (const [name, value] of Object.entries(UNUSED)) process.env[name] ??= value

const CAST = {
  biostatistician: 'biostatistician', second: 'biostatistician', cleared: 'biostatistician',
  dataManager: 'data-manager', investigator: 'investigator', monitor: 'monitor',
} as const satisfies Record<string, StudyRole>
export type Part = keyof typeof CAST

const PASSWORD = 'a password for tests'
const CHEAP = { memoryCost: 8, timeCost: 1, parallelism: 1 }

interface Member { readonly id: PersonId, readonly name: string, readonly email: string }

async function makePeople(db: Database): Promise<Record<Part, Member> & { administrator: Member }> {
  const passwordHash = await hash(PASSWORD, CHEAP)
  const make = async (name: string, administrator = false): Promise<Member> => {
    const member = { id: newId<PersonId>(), name: `Test ${name}`, email: `${randomUUID()}@example.org` }
    await db.insert(person).values({ ...member, passwordHash, installationRole: administrator ? 'administrator' : null })
    return member
  }
  const people = await Promise.all((Object.keys(CAST) as Part[]).map(async part => [part, await make(part)] as const))
  return { ...Object.fromEntries(people) as Record<Part, Member>, administrator: await make('administrator', true) }
}

/** A plan version as if it had been signed; the newest one is in force. */
export async function putPlanInForce(db: Database, { studyId, authorId, document, version = 1 }: { studyId: StudyId, authorId: PersonId, document: Plan, version?: number }): Promise<PlanId> {
  const id = newId<PlanId>()
  await db.update(planTable).set({ state: 'superseded' }).where(sql`${planTable.studyId} = ${studyId} and ${planTable.state} = 'signed'`)
  await db.insert(planTable).values({
    id, studyId, version, state: 'signed', document, bytes: planBytes(document), hash: planHash(document), authorId, contributors: [authorId], signedAt: sql`now()`,
  })
  return id
}

/**
 * A study of its own with somebody for every role and a plan in force, made past the interface; `null` leaves the
 * plan out. What is tested of extracts and verdicts always goes through the services.
 */
export async function serviceStudy(db: Database, plan: ((protocolNumber: string) => Plan) | null = trialPlan) {
  const people = await makePeople(db)
  const studyId = newId<StudyId>()
  const protocolNumber = `T-${studyId}`
  const document = plan?.(protocolNumber) ?? null
  await db.insert(study).values({ id: studyId, protocolNumber, title: 'A study', phase: '2', sponsor: 'Nobody', blinded: document?.blinding !== 'open-label' })
  const grantedBy = people.administrator.id
  for (const part of Object.keys(CAST) as Part[]) {
    await db.insert(studyMember).values({ id: newId(), studyId, personId: people[part].id, role: CAST[part], reason: 'Test', grantedBy })
  }
  await db.insert(clearance).values({ id: newId(), studyId, personId: people.cleared.id, reason: 'Test', proposedBy: people.biostatistician.id, grantedBy, grantedAt: sql`now()` })
  if (document) await putPlanInForce(db, { studyId, authorId: people.biostatistician.id, document })

  const as = async (part: Part): Promise<Viewer> => {
    const standing = await standingOf(db, people[part].id, studyId)
    if (!standing) throw new Error('no such study')
    return { person: people[part], sessionId: newId<SessionId>(), standing, request: { requestId: randomUUID(), origin: '192.0.2.1' } }
  }
  /** What a signing asks for, with who signs. */
  const signing = async (part: Part) => ({ viewer: await as(part), identifier: people[part].email, password: PASSWORD })
  return { db, studyId, people, document, as, signing }
}
export type ServiceStudy = Awaited<ReturnType<typeof serviceStudy>>

export const streamOf = (content: string | Uint8Array) => Readable.from([Buffer.from(content)])

interface Upload { readonly fileName?: string, readonly cutOff?: string, readonly purpose?: 'interim' | 'database-lock' }

/** Brings a file in as the data manager; at the cut-off of the first look unless told otherwise. */
export async function upload({ db, studyId, as }: ServiceStudy, content: string | Uint8Array, { fileName = 'adeff.csv', cutOff = '2026-04-02', purpose = 'interim' }: Upload = {}) {
  return uploadExtract(db, { studyId, fileName, cutOff, purpose, source: streamOf(content), viewer: await as('dataManager') })
}

/** Does the job of a check at once, without a queue or threads. */
export const judgeNow = (db: Database, address: { readonly studyId: StudyId, readonly extractId: ExtractId }) =>
  runCheck(db, address, task => Promise.resolve(judgeExtract(task)))

/** Brings a file in and judges it. */
export async function uploadAndJudge(own: ServiceStudy, content: string, options: Upload = {}): Promise<ExtractId> {
  const { id } = await upload(own, content, options)
  const extractId = id as ExtractId
  await judgeNow(own.db, { studyId: own.studyId, extractId })
  return extractId
}

/** Brings the allocation in as the cleared member; the extracts named are judged again. */
export async function allocate(own: ServiceStudy, content: string, extracts: readonly ExtractId[] = []) {
  const list = await uploadAllocation(own.db, { studyId: own.studyId, kind: 'true', source: streamOf(content), viewer: await own.as('cleared') })
  for (const extractId of extracts) await judgeNow(own.db, { studyId: own.studyId, extractId })
  return list
}

/** The code and findings with which something is refused; fails when it is not. */
export async function refusalOf(promise: Promise<unknown>): Promise<{ code: string, errors: readonly { code: string }[] }> {
  try {
    await promise
  }
  catch (error) {
    if (error instanceof Error && 'code' in error && 'errors' in error) return error as unknown as { code: string, errors: readonly { code: string }[] }
    throw error
  }
  throw new Error('nothing was refused')
}
