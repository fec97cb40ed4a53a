import { z } from 'zod'
import { STUDY_ROLES } from '../access/actions'
import { memberId, personId } from '../schemas/ids'
import { defineOperation } from './operation'
import { EXAMPLE, momentText, personView, reasonText, studyParams, uuid } from './parts'

/** One role of one person in a study; whoever holds two roles is listed twice. */
export const memberView = z.strictObject({
  id: uuid,
  person: personView,
  role: z.enum(STUDY_ROLES),
  reason: z.string(),
  from: momentText,
  until: momentText.nullable(),
  endReason: z.string().nullable(),
})
export type MemberView = z.infer<typeof memberView>

const study = { studyId: EXAMPLE.id }

export const listMembersOperation = defineOperation({
  id: 'members.list', method: 'GET', path: '/api/studies/[studyId]/members', action: 'members.read', scope: 'study',
  params: studyParams, query: null, body: null, answer: z.strictObject({ members: z.array(memberView) }), errors: [], example: { params: study },
})

export const grantMemberOperation = defineOperation({
  id: 'members.grant', method: 'POST', path: '/api/studies/[studyId]/members', action: 'members.manage', scope: 'study',
  params: studyParams, query: null, body: z.strictObject({ personId, role: z.enum(STUDY_ROLES), reason: reasonText }), answer: memberView,
  errors: ['already-done', 'wrong-state', 'separation-of-duties'],
  example: { params: study, body: { personId: EXAMPLE.id, role: 'data-manager', reason: 'Named in the delegation log.' } },
})

export const endMemberOperation = defineOperation({
  id: 'members.end', method: 'POST', path: '/api/studies/[studyId]/members/[memberId]/end', action: 'members.manage', scope: 'study',
  params: studyParams.extend({ memberId }), query: null, body: z.strictObject({ reason: reasonText }), answer: memberView,
  errors: ['already-done'], example: { params: { ...study, memberId: EXAMPLE.id }, body: { reason: 'Moved to another study.' } },
})
