import { readInvitationOperation } from '#shared/contract/session'
import { readInvitation } from '../../services/invitations'

export default definePublicHandler(readInvitationOperation, ({ body, db, request }) =>
  readInvitation(db, { ...body, request }))
