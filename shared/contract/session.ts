import { z } from 'zod'
import { INSTALLATION_ROLES, STUDY_ROLES } from '../access/actions'
import { sessionId } from '../schemas/ids'
import { emailAddress, lineText, newPassword } from '../schemas/text'
import { defineOperation } from './operation'
import { EXAMPLE, momentText, uuid } from './parts'

const membership = z.strictObject({
  studyId: uuid,
  protocolNumber: z.string(),
  title: z.string(),
  roles: z.array(z.enum(STUDY_ROLES)),
  cleared: z.boolean(),
  exposed: z.boolean(),
  blindHolds: z.boolean(),
})

/** Who is signed in and what they hold: what the client needs to offer only what will be accepted. */
export const viewerView = z.strictObject({
  person: z.strictObject({ id: uuid, name: z.string(), email: z.string(), installationRole: z.enum(INSTALLATION_ROLES).nullable() }),
  /** The installation shows invented content. */
  demo: z.boolean(),
  memberships: z.array(membership),
})
export type ViewerView = z.infer<typeof viewerView>

export const viewerOperation = defineOperation({
  id: 'me.read', method: 'GET', path: '/api/me', action: 'own.read', scope: 'installation',
  params: null, query: null, body: null, answer: viewerView, errors: [], example: {},
})

const sessionView = z.strictObject({
  id: uuid,
  createdAt: momentText,
  lastSeenAt: momentText,
  /** Network address of the sign-in. */
  origin: z.string(),
  /** The session that asks. */
  current: z.boolean(),
})

export const listSessionsOperation = defineOperation({
  id: 'sessions.list', method: 'GET', path: '/api/me/sessions', action: 'own.read', scope: 'installation',
  params: null, query: null, body: null, answer: z.strictObject({ sessions: z.array(sessionView) }), errors: [], example: {},
})

export const endSessionOperation = defineOperation({
  id: 'sessions.end', method: 'POST', path: '/api/me/sessions/[sessionId]/end', action: 'own.read', scope: 'installation',
  params: z.strictObject({ sessionId }), query: null, body: null, answer: null, errors: ['not-found', 'already-done'],
  example: { params: { sessionId: EXAMPLE.id } },
})

const token = z.string().min(1).max(120)
const HOLDS_THE_LINK = 'whoever holds an invitation link has no account to sign in with yet'

/** Whom a link invites; `person` is null on the link for the first administrator. The token travels in the body, out of logs. */
export const readInvitationOperation = defineOperation({
  id: 'invitations.read', method: 'POST', path: '/api/invitations/read', action: { public: HOLDS_THE_LINK }, scope: 'installation',
  params: null, query: null, body: z.strictObject({ token }),
  answer: z.strictObject({ person: z.strictObject({ name: z.string(), email: z.string() }).nullable(), expiresAt: momentText }),
  errors: ['not-found', 'too-many-attempts'], example: { body: { token: `${EXAMPLE.id}.c2VjcmV0` } },
})

export const acceptInvitationOperation = defineOperation({
  id: 'invitations.accept', method: 'POST', path: '/api/invitations/accept', action: { public: HOLDS_THE_LINK }, scope: 'installation',
  params: null, query: null,
  body: z.strictObject({ token, password: newPassword, self: z.strictObject({ name: lineText(120), email: emailAddress }).nullable() }),
  answer: null, errors: ['not-found', 'already-done', 'too-many-attempts'],
  example: { body: { token: `${EXAMPLE.id}.c2VjcmV0`, password: 'a long enough phrase', self: null } },
})
