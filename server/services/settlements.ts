import { and, eq, sql } from 'drizzle-orm'
import type { Database, Transaction } from '../database/client'
import { newId } from '../database/newId'
import { onlyRow } from '../database/onlyRow'
import { deviation, settlement } from '../database/schema/deviation'
import { DomainError } from '../domainError'
import { deviationFacts, handsIn, type DeviationAddress, type DeviationFacts } from './deviationFacts'
import type { DeviationState, SettlementKind } from './deviationRules'
import { allowedNow, viewDeviation } from './deviationViews'
import { makeMemo } from './memos'
import { notify } from './notices'
import { appendRecord } from './record'
import { requireSeparation } from './separation'
import { sign, type Credentials } from './signatures'
import { actorOf, type Viewer } from './viewer'

/** Where a settlement leads; an overruling first waits for the second biostatistician. */
const LEADS_TO: Readonly<Record<SettlementKind, DeviationState>> = {
  'accept-step': 'settled',
  'keep-under-observation': 'under-observation',
  'amend-plan': 'amended',
  'report-without-claim': 'settled',
  'overrule': 'awaiting-second',
}

async function lockedFacts(tx: Transaction, address: DeviationAddress): Promise<DeviationFacts> {
  await tx.select({ id: deviation.id }).from(deviation)
    .where(and(eq(deviation.studyId, address.studyId), eq(deviation.id, address.deviationId))).for('update')
  return deviationFacts(tx, address)
}

/** What a settlement is signed over: the verdict it rests on, and the decision with its note. */
const statementOf = ({ row, newest, check: { plan } }: DeviationFacts, kind: SettlementKind, note: string) => ({
  deviation: row.id, number: row.number, analysis: row.analysis, planHash: plan.hash, extract: newest.extract.number,
  verdict: newest.entry.verdict.word, step: newest.entry.verdict.step, kind, note,
})

export interface Settle extends DeviationAddress, Credentials {
  readonly kind: SettlementKind
  readonly note: string
  readonly viewer: Viewer
}

/**
 * Settles a deviation on its newest released verdict. Accepting the step or reporting without a claim makes the
 * memo in the same transaction.
 *
 * @throws {DomainError} `wrong-state` when the events of the study or the verdict do not allow this settlement,
 *   `separation-of-duties` for whoever uploaded an extract or signed a release of it.
 */
export async function settle(db: Database, { kind, note, viewer, identifier, password, ...address }: Settle) {
  return await db.transaction(async (tx) => {
    const facts = await lockedFacts(tx, address)
    if (!allowedNow(facts).includes(kind)) throw new DomainError('wrong-state', [{ pointer: '/kind', code: 'settlement-not-allowed' }])
    const { uploaders, releasers } = await handsIn(tx, facts)
    requireSeparation('deviation.settle', viewer.person.id, { 'extract.upload': uploaders, 'release.sign': releasers })
    const { studyId, deviationId } = address
    const { id: signatureId } = await sign(tx, {
      studyId, viewer, identifier, password, meaning: 'settled', subject: deviationId, content: statementOf(facts, kind, note), reason: note,
    })
    const row = onlyRow(await tx.insert(settlement).values({
      id: newId(), studyId, deviationId, checkId: facts.newest.entry.checkId, kind, note, settledBy: viewer.person.id, signatureId,
    }).returning())
    await tx.update(deviation).set({ state: LEADS_TO[kind] }).where(eq(deviation.id, deviationId))
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'deviation.settled', subject: deviationId,
      detail: { number: facts.row.number, kind, note, signature: signatureId },
    })
    await notify(tx, { studyId, kind: 'deviation', id: deviationId })
    if (LEADS_TO[kind] === 'settled') await makeMemo(tx, { studyId, settlementId: row.id, viewer })
    return viewDeviation(tx, address)
  })
}

export interface SecondSettlement extends DeviationAddress, Credentials { readonly viewer: Viewer }

/** The second of the two unexposed biostatisticians whom an overruling needs; the memo follows. */
export async function secondSettlement(db: Database, { viewer, identifier, password, ...address }: SecondSettlement) {
  return await db.transaction(async (tx) => {
    const facts = await lockedFacts(tx, address)
    const first = facts.settlements[facts.settlements.length - 1]
    if (facts.row.state !== 'awaiting-second' || first?.kind !== 'overrule' || first.secondBy !== null) throw new DomainError('wrong-state')
    if (facts.study.blindBrokenAt !== null) throw new DomainError('wrong-state', [{ code: 'blind-broken' }])
    const { uploaders, releasers } = await handsIn(tx, facts)
    requireSeparation('deviation.settle-second', viewer.person.id, {
      'extract.upload': uploaders, 'release.sign': releasers, 'overrule.first': [first.settledBy],
    })
    const { studyId, deviationId } = address
    const { id: secondSignatureId } = await sign(tx, {
      studyId, viewer, identifier, password, meaning: 'seconded', subject: deviationId, content: statementOf(facts, first.kind, first.note), reason: null,
    })
    await tx.update(settlement).set({ secondBy: viewer.person.id, secondSignatureId, secondAt: sql`now()` }).where(eq(settlement.id, first.id))
    await tx.update(deviation).set({ state: 'settled' }).where(eq(deviation.id, deviationId))
    await appendRecord(tx, {
      chain: { studyId }, actor: actorOf(viewer), action: 'deviation.overruled', subject: deviationId,
      detail: { number: facts.row.number, note: first.note, signature: secondSignatureId },
    })
    await notify(tx, { studyId, kind: 'deviation', id: deviationId })
    await makeMemo(tx, { studyId, settlementId: first.id, viewer })
    return viewDeviation(tx, address)
  })
}
