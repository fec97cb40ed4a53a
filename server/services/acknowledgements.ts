import { eq } from 'drizzle-orm'
import type { Database, Transaction } from '../database/client'
import { violatesUnique } from '../database/failures'
import { newId } from '../database/newId'
import { acknowledgement, deviation } from '../database/schema/deviation'
import { DomainError } from '../domainError'
import { deviationFacts, type DeviationAddress, type DeviationFacts } from './deviationFacts'
import { namedInvestigators } from './deviations'
import { viewDeviation } from './deviationViews'
import { notify } from './notices'
import { appendRecord } from './record'
import { sign, type Credentials } from './signatures'
import { actorOf, type Viewer } from './viewer'

export interface Acknowledge extends DeviationAddress, Credentials {
  readonly decision: 'acknowledged' | 'declined'
  readonly comment: string | null
  readonly viewer: Viewer
}

/** Nobody acknowledges for another: only an investigator whom the plan names. */
async function requireNamed(tx: Transaction, { study: { id }, check: { plan } }: DeviationFacts, viewer: Viewer): Promise<void> {
  const named = await namedInvestigators(tx, id, plan.document.acknowledger.email)
  if (!named.some(investigator => investigator.id === viewer.person.id)) throw new DomainError('not-permitted', [{ code: 'not-the-named-investigator' }])
}

/** What the investigator signs over: the deviation as they read it, with what they answer. */
const statementOf = ({ row, newest, check: { plan } }: DeviationFacts, decision: string, comment: string | null) => ({
  deviation: row.id, number: row.number, analysis: row.analysis, planHash: plan.hash,
  extract: newest.extract.number, verdict: newest.entry.verdict.word, step: newest.entry.verdict.step, decision, comment,
})

/**
 * The named investigator says, under signature, that they have been informed, or declines and says why. It
 * changes no verdict, and it can be given once.
 */
export async function acknowledge(db: Database, { decision, comment: given, viewer, identifier, password, ...address }: Acknowledge) {
  const comment = given === '' ? null : given
  if (decision === 'declined' && comment === null) throw new DomainError('invalid-input', [{ pointer: '/comment', code: 'required' }])
  try {
    return await db.transaction(async (tx) => {
      await tx.select({ id: deviation.id }).from(deviation).where(eq(deviation.id, address.deviationId)).for('update')
      const facts = await deviationFacts(tx, address)
      await requireNamed(tx, facts, viewer)
      if (facts.acknowledged) throw new DomainError('already-done')
      const { studyId, deviationId } = address
      const signature = await sign(tx, {
        studyId, viewer, identifier, password, meaning: decision, subject: deviationId, content: statementOf(facts, decision, comment), reason: comment,
      })
      await tx.insert(acknowledgement).values({ id: newId(), studyId, deviationId, decision, comment, personId: viewer.person.id, signatureId: signature.id })
      const view = await viewDeviation(tx, address)
      await appendRecord(tx, {
        chain: { studyId }, actor: actorOf(viewer), action: `deviation.${decision}`, subject: deviationId,
        detail: { number: facts.row.number, comment, signature: signature.id },
      })
      await notify(tx, { studyId, kind: 'deviation', id: deviationId })
      return view
    })
  }
  catch (error) {
    if (violatesUnique(error, 'acknowledgement_deviation_id_unique')) throw new DomainError('already-done')
    throw error
  }
}
