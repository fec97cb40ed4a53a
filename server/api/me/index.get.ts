import { viewerOperation } from '#shared/contract/session'
import { config } from '../../config'
import { membershipsOf } from '../../services/viewer'

export default defineApiHandler(viewerOperation, async ({ viewer: { person, standing }, db }) => ({
  person: { ...person, installationRole: standing.installationRole },
  demo: config().demo,
  memberships: await membershipsOf(db, person.id),
}))
