import { acceptInvitationOperation } from '#shared/contract/session'
import { acceptInvitation } from '../../services/invitations'

export default definePublicHandler(acceptInvitationOperation, ({ body, db, request }) =>
  acceptInvitation(db, { ...body, request }))
