import { writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { config } from '../config'
import { closeDatabase, database } from '../database/client'
import { person } from '../database/schema/person'
import { ADMINISTRATOR, CAST, type DemoPeople } from '../demo/people'
import { tellStory } from '../demo/story'

/** Fills an empty database with the demo study, only where `STIPULE_DEMO` says so. */
async function seed(): Promise<void> {
  if (!config().demo) throw new Error('STIPULE_DEMO is not set: the demo is made only where it is asked for')
  const [somebody] = await database().select({ id: person.id }).from(person).limit(1)
  if (somebody) return say('Demo: the database has people already, nothing was added.')
  say('Demo: making people, studies, extracts, verdicts and a memo.')
  keepAccounts(await tellStory(database()))
  say('Demo: ready.')
}

const say = (line: string) => void process.stdout.write(`${line}\n`)

/** For the person who started it: who can sign in, and with what. */
function keepAccounts({ password }: DemoPeople): void {
  const accounts = [
    { ...ADMINISTRATOR, password, roles: ['administrator'] },
    ...Object.values(CAST).map(({ name, email, role }) => ({ name, email, password, roles: [name === CAST.noor.name ? 'firewalled statistician' : role] })),
  ]
  writeFileSync(join(config().dataDir, 'demo-accounts.json'), `${JSON.stringify(accounts, null, 2)}\n`, { mode: 0o600 })
}

try {
  await seed()
}
catch (error) {
  process.stderr.write(`The demo could not be made: ${error instanceof Error ? error.stack ?? error.message : String(error)}\n`)
  process.exitCode = 1
}
finally {
  await closeDatabase()
}
