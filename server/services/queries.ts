import { and, eq, sql } from 'drizzle-orm'
import { actingScreens } from '../../shared/decision/screen'
import type { DataQueryId, ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Database } from '../database/client'
import { dataQuery, extract } from '../database/schema/extract'
import { DomainError } from '../domainError'
import { viewExtract } from './extractViews'
import { enqueue } from '../jobs/enqueue'
import { notify } from './notices'
import { readSignedPlan } from './plans'
import { appendRecord } from './record'
import { requireSeparation } from './separation'
import { sign, type Credentials } from './signatures'
import { actorOf, type Viewer } from './viewer'

export interface ResolveQuery extends Credentials {
  readonly studyId: StudyId
  readonly extractId: ExtractId
  readonly queryId: DataQueryId
  readonly decision: 'cleared' | 'overruled'
  readonly note: string
  readonly viewer: Viewer
}

/**
 * Clears or overrules a data query in writing; the extract is judged again. Two values under one key stay open:
 * nothing that is written makes one of them the value.
 */
export function resolveQuery(db: Database, { studyId, extractId, queryId, decision, note, viewer, identifier, password }: ResolveQuery) {
  return db.transaction(async (tx) => {
    const [found] = await tx.select({ extract, query: dataQuery }).from(extract)
      .innerJoin(dataQuery, and(eq(dataQuery.studyId, extract.studyId), eq(dataQuery.extractId, extract.id)))
      .where(and(eq(extract.studyId, studyId), eq(extract.id, extractId), eq(dataQuery.id, queryId))).for('update')
    if (!found) throw new DomainError('not-found')
    if (found.query.state !== 'open') throw new DomainError('already-done')
    if (found.extract.state === 'withdrawn') throw new DomainError('wrong-state', [{ code: 'extract-withdrawn' }])
    const { document } = await readSignedPlan(tx, { studyId, planId: found.extract.planId })
    const screen = actingScreens(document).find(({ id }) => id === found.query.screen)
    if (screen?.kind === 'duplicate-key') throw new DomainError('wrong-state', [{ code: 'duplicate-key-stays' }])
    requireSeparation('query.resolve', viewer.person.id, { 'extract.upload': [found.extract.uploadedBy] })

    const { screen: screenId, endpoint, number } = found.query
    await sign(tx, {
      studyId, viewer, identifier, password, meaning: `query-${decision}`, subject: queryId, reason: note,
      content: { query: queryId, extract: found.extract.bytesHash, screen: screenId, endpoint, decision, note },
    })
    await tx.update(dataQuery).set({ state: decision, note, resolvedAt: sql`now()` }).where(eq(dataQuery.id, queryId))
    await enqueue(tx, 'check', { studyId, extractId })
    await notify(tx, { studyId, kind: 'extract', id: extractId })
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: `query.${decision}`, subject: queryId,
      detail: { number, extract: found.extract.number, screen: screenId, endpoint, note },
    })
    return viewExtract(tx, { studyId, extractId, viewer })
  })
}
