import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { StudyId } from '#shared/schemas/ids'
import { listExposures, recordExposure } from '../../../server/services/exposures'
import { endClearance, listClearances } from '../../../server/services/clearances'
import { endMember, grantMember, listMembers } from '../../../server/services/members'
import { createPerson, deactivatePerson } from '../../../server/services/people'
import { readRecord, verifyStoredChain, type Chain } from '../../../server/services/record'
import { signOut } from '../../../server/services/sessions'
import { signIn } from '../../../server/services/signIn'
import { createStudy } from '../../../server/services/studies'
import { outsideStudies, standingOf, type Viewer } from '../../../server/services/viewer'
import { freshDatabase, type TestDatabase } from '../../helpers/database'
import { serviceStudy, type ServiceStudy } from '../../helpers/serviceStudy'

const request = { requestId: 'c3d1', origin: '192.0.2.1' }
const reason = 'Decided by the sponsor.'

let database: TestDatabase
let own: ServiceStudy
let administrator: Viewer

beforeAll(async () => {
  database = await freshDatabase()
  own = await serviceStudy(database.db, null)
  administrator = { ...await own.as('monitor'), person: own.people.administrator, standing: outsideStudies('administrator'), request }
})
afterAll(() => database.drop())

/** The newest entries of a chain, oldest first, as their reader has them. */
async function lastEntries(chain: Chain, count: number) {
  const entries = await readRecord(database.db, { chain, cleared: false, after: 0, limit: 1000 })
  return entries.slice(-count).map(({ head, detail }) => ({
    action: head.action, subject: head.subject, actor: head.actor, origin: head.origin,
    detail: Object.fromEntries(Object.entries(detail).map(([field, kept]) => [field, 'value' in kept ? kept.value : kept])),
  }))
}

describe('the installation\'s record', () => {
  it('keeps a sign-in and its end with who and whence', async () => {
    const { identifier: email, password } = await own.signing('monitor')
    const { sessionId } = await signIn(database.db, { email, password, request })
    await signOut(database.db, { sessionId, request })
    await signOut(database.db, { sessionId, request })
    const actor = { personId: own.people.monitor.id, name: own.people.monitor.name, roles: [] }
    expect(await lastEntries('installation', 2)).toEqual([
      { action: 'session.started', subject: sessionId, actor, origin: '192.0.2.1', detail: { factor: 'password' } },
      { action: 'session.ended', subject: sessionId, actor, origin: '192.0.2.1', detail: { why: 'signed-out' } },
    ])
  })

  it('keeps a refused sign-in by nobody\'s name, and not what was typed for an account that there is not', async () => {
    const nobody = { personId: null, name: null, roles: [] }
    await expect(signIn(database.db, { email: own.people.monitor.email, password: 'wrong', request })).rejects.toMatchObject({ code: 'sign-in-failed' })
    await expect(signIn(database.db, { email: 'Tr0ub4dor&3', password: 'x', request })).rejects.toMatchObject({ code: 'sign-in-failed' })
    expect(await lastEntries('installation', 2)).toEqual([
      { action: 'session.refused', subject: own.people.monitor.id, actor: nobody, origin: '192.0.2.1', detail: { account: 'known' } },
      { action: 'session.refused', subject: 'unknown', actor: nobody, origin: '192.0.2.1', detail: { account: 'unknown' } },
    ])
  })

  it('keeps accounts made and closed, by the administrator', async () => {
    const { id } = await createPerson(database.db, { name: 'Newly Invited', email: 'new@example.org', installationRole: null, viewer: administrator })
    await deactivatePerson(database.db, { personId: id, reason, viewer: administrator })
    const actor = { personId: own.people.administrator.id, name: own.people.administrator.name, roles: ['administrator'] }
    expect(await lastEntries('installation', 2)).toEqual([
      { action: 'person.created', subject: id, actor, origin: '192.0.2.1', detail: { name: 'Newly Invited', email: 'new@example.org', installationRole: null } },
      { action: 'person.deactivated', subject: id, actor, origin: '192.0.2.1', detail: { reason } },
    ])
  })

  it('keeps nothing of what was undone', async () => {
    const before = await readRecord(database.db, { chain: 'installation', cleared: false, after: 0, limit: 1000 })
    await expect(createPerson(database.db, { name: 'Again', email: 'new@example.org', installationRole: null, viewer: administrator })).rejects.toMatchObject({ code: 'already-done' })
    expect(await readRecord(database.db, { chain: 'installation', cleared: false, after: 0, limit: 1000 })).toEqual(before)
  })
})

describe('a study\'s record', () => {
  it('begins with the study and follows roles', async () => {
    const study = await createStudy(database.db, { protocolNumber: 'REC-1', title: 'A study', phase: '3', sponsor: 'Example Sponsor', viewer: administrator })
    const member = await grantMember(database.db, { studyId: study.id, personId: own.people.monitor.id, role: 'monitor', reason, viewer: administrator })
    await endMember(database.db, { studyId: study.id, memberId: member.id, reason, viewer: administrator })
    const entries = await lastEntries({ studyId: study.id }, 9)
    expect(entries.map(({ action }) => action)).toEqual(['study.created', 'member.granted', 'member.ended'])
    expect(entries[1]).toMatchObject({ subject: own.people.monitor.id, detail: { memberId: member.id, role: 'monitor', reason } })
    expect(await verifyStoredChain(database.db, { studyId: study.id })).toMatchObject({ fault: null, size: 3 })
  })

  it('says that a clearance ended because the role did', async () => {
    const { studyId, people, as } = await serviceStudy(database.db, null)
    const { members } = await listMembers(database.db, { studyId })
    const member = members.find(({ person }) => person.id === people.cleared.id)!
    expect((await as('cleared')).standing.cleared).toBe(true)
    await endMember(database.db, { studyId, memberId: member.id, reason, viewer: administrator })
    expect((await lastEntries({ studyId }, 2)).map(({ action }) => action)).toEqual(['clearance.ended', 'member.ended'])
    expect(await standingOf(database.db, people.cleared.id, studyId)).toMatchObject({ studyRoles: [], cleared: false })
  })
})

describe('exposure', () => {
  const expose = async (viewer: Viewer, studyId: StudyId, how: 'allocation' | 'arm-level-view', subject: string) =>
    database.db.transaction(tx => recordExposure(tx, { studyId, viewer, how, subject }))

  it('begins once in each way, is permanent, and says by whose clearance', async () => {
    const { studyId, people, as } = await serviceStudy(database.db, null)
    const viewer = await as('cleared')
    await expose(viewer, studyId, 'allocation', 'list-1')
    await expose(viewer, studyId, 'allocation', 'list-2')
    await expose(viewer, studyId, 'arm-level-view', 'extract-1')
    const entries = (await lastEntries({ studyId }, 9)).filter(({ action }) => action === 'exposure.began')
    expect(entries.map(({ detail }) => detail)).toEqual([{ how: 'allocation', through: 'list-1' }, { how: 'arm-level-view', through: 'extract-1' }])

    const clearanceId = (await listClearances(database.db, { studyId })).clearances[0]!.id
    await endClearance(database.db, { studyId, clearanceId, reason, viewer: administrator })
    expect((await as('cleared')).standing).toMatchObject({ cleared: false, exposed: true, blindHolds: true })

    const { exposures } = await listExposures(database.db, { studyId })
    expect(exposures.map(({ person, how, clearance }) => ({ person, how, clearance }))).toEqual(['allocation', 'arm-level-view'].map(how => ({
      person: { id: people.cleared.id, name: people.cleared.name }, how,
      clearance: { reason: 'Test', grantedBy: { id: people.administrator.id, name: people.administrator.name } },
    })))
  })

  it('without a clearance says so', async () => {
    const { studyId, as } = await serviceStudy(database.db, null)
    await expose(await as('dataManager'), studyId, 'allocation', 'mail of a site')
    expect((await listExposures(database.db, { studyId })).exposures).toEqual([expect.objectContaining({ how: 'allocation', clearance: null })])
  })

  it('is undone with the transaction that would have shown something', async () => {
    const { studyId, as } = await serviceStudy(database.db, null)
    const viewer = await as('cleared')
    await expect(database.db.transaction(async (tx) => {
      await recordExposure(tx, { studyId, viewer, how: 'allocation', subject: 'list' })
      throw new Error('the list was not shown')
    })).rejects.toThrow()
    expect((await listExposures(database.db, { studyId })).exposures).toEqual([])
  })
})
