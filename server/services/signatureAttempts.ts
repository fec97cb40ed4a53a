import type { StudyId } from '../../shared/schemas/ids'
import type { Database } from '../database/client'
import { DomainError } from '../domainError'
import { countAttempt, forgiveAttempt } from './attempts'
import { appendRecord } from './record'
import { actorOf, type Viewer } from './viewer'

const recordRefusal = (db: Database, studyId: StudyId, viewer: Viewer) => db.transaction(tx => appendRecord(tx, {
  chain: { studyId }, actor: actorOf(viewer), action: 'signature.refused', subject: viewer.person.id, detail: {},
}))

/**
 * Runs an operation that asks for a signature. Attempts are counted before, so that parallel ones cannot slip
 * past; a refusal is recorded in a transaction of its own, because that of the operation is undone.
 *
 * @throws {DomainError} `too-many-attempts`, and whatever the operation throws.
 */
export async function signedOperation<T>(db: Database, { studyId, viewer }: { studyId: StudyId, viewer: Viewer }, run: () => T | Promise<T>): Promise<T> {
  const attempt = { kind: 'signature', account: viewer.person.id, origin: viewer.request.origin } as const
  await countAttempt(db, attempt)
  try {
    const result = await run()
    await forgiveAttempt(db, attempt)
    return result
  }
  catch (error) {
    if (error instanceof DomainError && error.code === 'signature-refused') await recordRefusal(db, studyId, viewer)
    else await forgiveAttempt(db, attempt)
    throw error
  }
}
