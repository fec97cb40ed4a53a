import { randomUUID } from 'node:crypto'
import postgres from 'postgres'
import { openDatabase, type OpenDatabase } from '../../server/database/client'

/** Template that the run's migration has filled once. */
const TEMPLATE = 'stipule_template'

export interface TestDatabase extends OpenDatabase {
  /** As the application's role, which owns nothing. */
  readonly url: string
  /** As the owner, for what the application may not do. */
  readonly ownerUrl: string
  readonly drop: () => Promise<void>
}

/** An entry of the environment that the test runner provides. */
export function fromEnvironment(name: string): string {
  const value = process.env[name]
  if (!value) throw new Error(`${name} is not set: the test runner starts the cluster and the server`)
  return value
}

const onDatabase = (url: string, name: string) => Object.assign(new URL(url), { pathname: `/${name}` }).href

async function asOwner(statement: string): Promise<void> {
  const sql = postgres(fromEnvironment('TEST_ADMIN_URL'), { max: 1, onnotice: () => {} })
  try {
    await sql.unsafe(statement)
  }
  finally {
    await sql.end()
  }
}

/** A migrated database of its own, connected as the application's role; drop it in `afterAll`. */
export async function freshDatabase(): Promise<TestDatabase> {
  const name = `test_${randomUUID().replaceAll('-', '')}`
  await asOwner(`create database ${name} template ${TEMPLATE}`)
  const url = onDatabase(fromEnvironment('DATABASE_URL'), name)
  const opened = openDatabase(url, { max: 4 })
  return {
    ...opened,
    url,
    ownerUrl: onDatabase(fromEnvironment('TEST_ADMIN_URL'), name),
    async drop() {
      await opened.close()
      await asOwner(`drop database ${name} with (force)`)
    },
  }
}
