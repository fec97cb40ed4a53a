import { database } from '../database/client'
import { servingRoleFault } from '../database/servingRole'
import { DomainError } from '../domainError'
import { log } from '../log'

let fit: Promise<void> | undefined

async function checkRole(): Promise<void> {
  const fault = await servingRoleFault(database())
  if (fault) {
    log.fatal({ fault }, 'refusing to serve')
    process.exitCode = 1
    process.kill(process.pid, 'SIGTERM')
    throw new DomainError('database-unavailable')
  }
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
