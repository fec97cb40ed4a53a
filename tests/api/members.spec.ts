import { beforeAll, describe, expect, it } from 'vitest'
import { endClearanceOperation, grantClearanceOperation, listClearancesOperation, listExposuresOperation, proposeClearanceOperation } from '#shared/contract/clearances'
import { endMemberOperation, grantMemberOperation, listMembersOperation } from '#shared/contract/members'
import { viewerOperation } from '#shared/contract/session'
import { listStudiesOperation, readStudyOperation } from '#shared/contract/studies'
import { admit, makeClient, makePerson, makeStudy, makeStudyWithRoles } from '../helpers/server'

type Cast = Awaited<ReturnType<typeof makeStudyWithRoles>>
const reason = 'Decided by the sponsor.'

describe('members of a study', () => {
  let studyId: string
  let as: Cast['as']

  beforeAll(async () => {
    ({ studyId, as } = await makeStudyWithRoles())
  })

  it('are listed to members and administrators', async () => {
    for (const { client } of [as.monitor, as.administrator]) {
      const { members } = await client.call(listMembersOperation, { params: { studyId } })
      expect(members).toHaveLength(6)
      expect(members.find(({ person }) => person.id === as.investigator.id)).toMatchObject({ role: 'investigator', until: null })
    }
  })

  it('see the study from admission until the end of their role', async () => {
    const { id, client } = await makeClient()
    const params = { studyId }
    expect(await client.refused(readStudyOperation, { params })).toMatchObject({ status: 404 })
    const member = await admit(as.administrator.client, { studyId, personId: id, role: 'monitor' })
    expect(await client.call(readStudyOperation, { params })).toMatchObject({ id: studyId, blinded: true, blindBrokenAt: null })
    expect((await client.call(listStudiesOperation)).studies).toEqual([expect.objectContaining({ id: studyId, roles: ['monitor'] })])
    const end = { params: { studyId, memberId: member.id }, body: { reason } }
    expect(await as.administrator.client.call(endMemberOperation, end)).toMatchObject({ endReason: reason })
    expect(await client.refused(readStudyOperation, { params })).toMatchObject({ status: 404 })
    expect((await client.call(listStudiesOperation)).studies).toEqual([])
    expect(await as.administrator.client.refused(endMemberOperation, end)).toMatchObject({ code: 'already-done' })
  })

  it('may hold two roles, not one twice', async () => {
    const { id, client } = await makeClient()
    await admit(as.administrator.client, { studyId, personId: id, role: 'monitor' })
    await admit(as.administrator.client, { studyId, personId: id, role: 'investigator' })
    expect((await client.call(viewerOperation)).memberships).toEqual([expect.objectContaining({ roles: ['investigator', 'monitor'] })])
    expect(await as.administrator.client.refused(grantMemberOperation, { params: { studyId }, body: { personId: id, role: 'monitor', reason } }))
      .toMatchObject({ status: 409, errors: [{ pointer: '/role', code: 'role-held' }] })
  })

  it('are never administrators, nor people that there are not', async () => {
    const other = await makePerson({ administrator: true })
    const grant = (personId: string) =>
      as.administrator.client.refused(grantMemberOperation, { params: { studyId }, body: { personId, role: 'monitor', reason } })
    expect(await grant(other.id)).toMatchObject({ status: 403, errors: [{ code: 'administrator-holds-no-role' }] })
    expect(await grant('01935f7e-6a5c-7c4e-9f1d-2b6a8f0c4d21')).toMatchObject({ status: 422, errors: [{ pointer: '/personId', code: 'no-such-person' }] })
  })

  it('of another study cannot be ended through this one', async () => {
    const elsewhere = await makeStudy(as.administrator.client)
    const { id } = await makePerson()
    const member = await admit(as.administrator.client, { studyId: elsewhere, personId: id, role: 'monitor' })
    expect(await as.administrator.client.refused(endMemberOperation, { params: { studyId, memberId: member.id }, body: { reason } })).toMatchObject({ status: 404 })
  })
})

describe('clearance', () => {
  let studyId: string
  let as: Cast['as']

  beforeAll(async () => {
    ({ studyId, as } = await makeStudyWithRoles())
  })

  const propose = (personId: string) => ({ params: { studyId }, body: { personId, reason } })

  it('is proposed by another biostatistician, granted by an administrator, ended with a reason', async () => {
    const { client, id } = await makeClient()
    await admit(as.administrator.client, { studyId, personId: id, role: 'biostatistician' })
    const standing = async () => (await client.call(viewerOperation)).memberships[0]!.cleared
    const proposed = await as.biostatistician.client.call(proposeClearanceOperation, propose(id))
    expect(proposed).toMatchObject({ grantedAt: null, endedAt: null, proposedBy: { id: as.biostatistician.id } })
    expect(await standing()).toBe(false)
    expect(await as.reviewer.client.refused(proposeClearanceOperation, propose(id))).toMatchObject({ code: 'already-done' })
    const params = { studyId, clearanceId: proposed.id }
    await as.administrator.client.call(grantClearanceOperation, { params })
    expect(await standing()).toBe(true)
    expect(await as.administrator.client.refused(grantClearanceOperation, { params })).toMatchObject({ code: 'already-done' })
    await as.administrator.client.call(endClearanceOperation, { params, body: { reason } })
    expect(await standing()).toBe(false)
    expect(await as.administrator.client.refused(endClearanceOperation, { params, body: { reason } })).toMatchObject({ code: 'already-done' })
    const { clearances } = await as.monitor.client.call(listClearancesOperation, { params: { studyId } })
    expect(clearances.find(row => row.id === proposed.id)).toMatchObject({ grantedBy: { id: as.administrator.id }, endReason: reason })
  })

  it('is never proposed for oneself, nor for other roles or strangers', async () => {
    expect(await as.biostatistician.client.refused(proposeClearanceOperation, propose(as.biostatistician.id)))
      .toMatchObject({ status: 403, code: 'separation-of-duties' })
    for (const { id } of [as.dataManager, as.stranger, as.administrator]) {
      expect(await as.biostatistician.client.refused(proposeClearanceOperation, propose(id)))
        .toMatchObject({ status: 409, errors: [{ pointer: '/personId', code: 'not-a-biostatistician' }] })
    }
  })

  it('ends with the role it stands beside', async () => {
    const { members } = await as.administrator.client.call(listMembersOperation, { params: { studyId } })
    const member = members.find(({ person }) => person.id === as.cleared.id)!
    await as.administrator.client.call(endMemberOperation, { params: { studyId, memberId: member.id }, body: { reason } })
    const { clearances } = await as.monitor.client.call(listClearancesOperation, { params: { studyId } })
    expect(clearances.filter(({ person }) => person.id === as.cleared.id)).toEqual([expect.objectContaining({ endReason: reason })])
  })

  it('alone exposes nobody', async () => {
    expect((await as.monitor.client.call(listExposuresOperation, { params: { studyId } })).exposures).toEqual([])
  })
})
