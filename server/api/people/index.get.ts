import { listPeopleOperation } from '#shared/contract/people'
import { listPeople } from '../../services/people'

export default defineApiHandler(listPeopleOperation, ({ db }) =>
  listPeople(db))
