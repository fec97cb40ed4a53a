import { z } from 'zod'
import { defineOperation } from './operation'
import { momentText, uuid } from './parts'

/** What the demo's mail server received for the viewer; empty where mail leaves by a server of one's own. */
export const readMailboxOperation = defineOperation({
  id: 'mailbox.read', method: 'GET', path: '/api/mailbox', action: 'own.read', scope: 'installation',
  params: null, query: null, body: null,
  answer: z.strictObject({ messages: z.array(z.strictObject({ id: uuid, sender: z.string(), subject: z.string(), body: z.string(), receivedAt: momentText })) }),
  errors: [], example: {},
})
