import { sql } from 'drizzle-orm'
import type { StudyId } from '../../shared/schemas/ids'
import type { Transaction } from '../database/client'

export const NOTICE_CHANNEL = 'stipule_change'

/** That something changed: ids alone. Who may see what is decided when they read it. */
export interface Notice {
  readonly studyId: StudyId
  readonly kind: 'plan' | 'extract' | 'check' | 'release' | 'deviation' | 'memo' | 'event'
  readonly id: string
}

/** Told to every web process when, and only when, the transaction commits. */
export async function notify(tx: Transaction, notice: Notice): Promise<void> {
  await tx.execute(sql`select pg_notify(${NOTICE_CHANNEL}, ${JSON.stringify(notice)})`)
}
