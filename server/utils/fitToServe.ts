import { database } from '../database/client'
import { servingRoleFault } from '../database/servingRole'
import { log } from '../log'

let fit: Promise<void> | undefined

async function checkRole(): Promise<void> {
  const fault = await servingRoleFault(database())
  if (!fault) return
  log.fatal({ fault }, 'refusing to serve')
  process.exit(1)
}

/**
 * Whether this process may serve with the database role it has; asked once, again after a failure to ask.
 * A role that is superuser or owns tables could undo the append-only record: the process then ends.
 */
export function fitToServe(): Promise<void> {
  fit ??= checkRole().catch((error) => {
    fit = undefined
    throw error
  })
  return fit
}
