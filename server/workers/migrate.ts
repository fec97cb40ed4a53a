import { existsSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { drizzle } from 'drizzle-orm/postgres-js'
import { migrate } from 'drizzle-orm/postgres-js/migrator'
import PgBoss from 'pg-boss'
import postgres from 'postgres'
import { migrationConfig } from '../config'
import { openDatabase } from '../database/client'
import { QUEUES, type Queue } from '../jobs/queues'
import { ensureMemoKeys } from '../memo/keys'
import { firstAdministratorLink } from '../services/invitations'

/**
 * Brings the database to this version, as its owner: tables, rights of the serving role, job queues; makes the
 * memo key when there is none. Run before the server; every step may be run again.
 */
const beside = fileURLToPath(new URL('./drizzle', import.meta.url))
const migrationsFolder = existsSync(beside) ? beside : 'drizzle'
const { migrationUrl, databaseUrl, dataDir, origin, secrets } = migrationConfig()
const servingRole = decodeURIComponent(new URL(databaseUrl).username)

const say = (line: string) => process.stdout.write(`${line}\n`)

/** Everything to serve with, and nothing to change or erase the record and the signatures with. */
const rights = (role: string) => `
  grant usage on schema public, pgboss to "${role}";
  grant select, insert, update, delete on all tables in schema public, pgboss to "${role}";
  grant usage, select on all sequences in schema public, pgboss to "${role}";
  grant execute on all functions in schema pgboss to "${role}";
  revoke update, delete, truncate on record_entry, signature from "${role}";
  do $$ declare part regclass; begin
    for part in select inhrelid::regclass from pg_inherits where inhparent = 'record_entry'::regclass loop
      execute format('revoke update, delete, truncate on %s from %I', part, '${role}');
    end loop;
  end $$;`

async function makeQueues(): Promise<void> {
  const boss = new PgBoss({ connectionString: migrationUrl, supervise: false, schedule: false })
  await boss.start()
  for (const [name, options] of Object.entries(QUEUES) as [Queue, typeof QUEUES[Queue]][]) {
    if (await boss.getQueue(name)) await boss.updateQueue(name, { name, ...options })
    else await boss.createQueue(name, { name, ...options })
  }
  await boss.stop({ graceful: false })
}

async function run(): Promise<void> {
  if (!/^[a-z_][a-z0-9_]*$/.test(servingRole)) throw new Error('DATABASE_URL names a role that is not a plain identifier')
  const owner = postgres(migrationUrl, { max: 1, onnotice: () => undefined })
  try {
    await migrate(drizzle(owner), { migrationsFolder })
    say('Database: tables are at this version.')
    await makeQueues()
    await owner.unsafe(rights(servingRole))
    say(`Database: rights of ${servingRole} are set, queues are there.`)
  }
  finally {
    await owner.end()
  }
  await ensureMemoKeys(dataDir)
  await offerFirstAdministrator()
}

/** On a database that has nobody yet, a single-use link; the demo makes its own people. */
async function offerFirstAdministrator(): Promise<void> {
  if (process.env.STIPULE_DEMO === 'true') return
  const { db, close } = openDatabase(databaseUrl, { max: 1 })
  try {
    const link = await firstAdministratorLink(db, { origin, authSecret: secrets.authSecret })
    if (link) say(`No administrator yet. This link makes the first one, once, within an hour:\n${link}`)
  }
  finally {
    await close()
  }
}

try {
  await run()
}
catch (error) {
  process.stderr.write(`The migration failed: ${error instanceof Error ? error.message : String(error)}\n`)
  process.exit(1)
}
process.exit(0)
