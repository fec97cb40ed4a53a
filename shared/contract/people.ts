import { z } from 'zod'
import { INSTALLATION_ROLES } from '../access/actions'
import { personId } from '../schemas/ids'
import { emailAddress, lineText } from '../schemas/text'
import { defineOperation } from './operation'
import { EXAMPLE, momentText, reasonText, uuid } from './parts'

export const personAccount = z.strictObject({
  id: uuid,
  name: z.string(),
  email: z.string(),
  installationRole: z.enum(INSTALLATION_ROLES).nullable(),
  createdAt: momentText,
  deactivatedAt: momentText.nullable(),
  /** Whether the invitation has been taken up. */
  ready: z.boolean(),
})
export type PersonAccount = z.infer<typeof personAccount>

const params = z.strictObject({ personId })
const example = { params: { personId: EXAMPLE.id } }

export const listPeopleOperation = defineOperation({
  id: 'people.list', method: 'GET', path: '/api/people', action: 'people.read', scope: 'installation',
  params: null, query: null, body: null, answer: z.strictObject({ people: z.array(personAccount) }), errors: [], example: {},
})

/** Makes an account without a password; its owner sets one by the link that is mailed. */
export const createPersonOperation = defineOperation({
  id: 'people.create', method: 'POST', path: '/api/people', action: 'people.manage', scope: 'installation',
  params: null, query: null,
  body: z.strictObject({ name: lineText(120), email: emailAddress, installationRole: z.enum(INSTALLATION_ROLES).nullable() }),
  answer: personAccount, errors: ['already-done'],
  example: { body: { name: 'Mara Lindqvist', email: 'mara@example.org', installationRole: null } },
})

export const inviteAgainOperation = defineOperation({
  id: 'people.invite-again', method: 'POST', path: '/api/people/[personId]/invitation', action: 'people.manage', scope: 'installation',
  params, query: null, body: null, answer: null, errors: ['not-found', 'wrong-state'], example,
})

/** Closes an account for good; what it did stays. */
export const deactivatePersonOperation = defineOperation({
  id: 'people.deactivate', method: 'POST', path: '/api/people/[personId]/deactivation', action: 'people.manage', scope: 'installation',
  params, query: null, body: z.strictObject({ reason: reasonText }), answer: personAccount,
  errors: ['not-found', 'wrong-state', 'separation-of-duties'], example: { ...example, body: { reason: 'Left the company.' } },
})
