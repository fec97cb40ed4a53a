import { sql } from 'drizzle-orm'
import { healthOperation } from '#shared/contract/health'

export default definePublicHandler(healthOperation, async ({ db }) => {
  await db.execute(sql`select 1`)
  return { status: 'ready' as const }
})
