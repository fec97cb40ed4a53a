import { config } from '../config'
import { closeDatabase } from '../database/client'
import { errorFacts, log } from '../log'

/** Reads the configuration and looks at the database role before the first request asks for either. */
export default defineNitroPlugin((nitro) => {
  config()
  fitToServe().catch(error => log.warn(errorFacts(error), 'database not reachable yet'))
  nitro.hooks.hook('close', closeDatabase)
})
