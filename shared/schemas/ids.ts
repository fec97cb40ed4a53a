import { z } from 'zod'

/** Schema of one aggregate's identifiers (UUIDv7), branded so that one kind cannot stand in for another. */
export const brandedId = <Name extends string>(name: Name) => z.string().uuid().describe(name).brand<Name>()

export const personId = brandedId('PersonId')
export type PersonId = z.output<typeof personId>

export const sessionId = brandedId('SessionId')
export type SessionId = z.output<typeof sessionId>

export const invitationId = brandedId('InvitationId')
export type InvitationId = z.output<typeof invitationId>

export const studyId = brandedId('StudyId')
export type StudyId = z.output<typeof studyId>

export const memberId = brandedId('MemberId')
export type MemberId = z.output<typeof memberId>

export const clearanceId = brandedId('ClearanceId')
export type ClearanceId = z.output<typeof clearanceId>
