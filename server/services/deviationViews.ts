import { asc, eq, inArray } from 'drizzle-orm'
import type { PlannedAnalysis } from '../../shared/plan/analysisSchema'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { deviation, memo } from '../database/schema/deviation'
import { person } from '../database/schema/person'
import { DomainError } from '../domainError'
import { say } from '../../shared/wording/say'
import { deviationFacts, type DeviationAddress, type DeviationFacts } from './deviationFacts'
import { acknowledgementState, classOf, settlementsAllowed } from './deviationRules'
import { extractTitle } from './extractTitles'
import { stepLabel } from './stepLabels'
import { signatureById } from './signatures'

type SettlementRow = DeviationFacts['settlements'][number]

/** The planned analysis as the plan version behind the newest verdict registers it. */
export function registeredAnalysis({ check: { plan }, row }: DeviationFacts): PlannedAnalysis {
  const found = plan.document.analyses.find(({ id }) => id === row.analysis)
  if (!found) throw new DomainError('internal')
  return found
}

/** Overruled means: by two, and nothing newer has reopened it. */
const isOverruled = ({ row, settlements }: DeviationFacts): boolean => {
  const last = settlements[settlements.length - 1]
  return row.state !== 'open' && last?.kind === 'overrule' && last.secondBy !== null
}

async function namesOf(db: Queryable, ids: readonly string[]): Promise<ReadonlyMap<string, string>> {
  if (ids.length === 0) return new Map()
  const rows = await db.select({ id: person.id, name: person.name }).from(person).where(inArray(person.id, ids as (typeof person.$inferSelect.id)[]))
  return new Map(rows.map(({ id, name }) => [id, name]))
}

async function acknowledgementView(db: Queryable, { row, acknowledged, study: { id } }: DeviationFacts, now: Date) {
  const names = await namesOf(db, acknowledged ? [acknowledged.personId] : [])
  return {
    state: acknowledgementState(acknowledged?.decision ?? null, row.dueAt, now),
    dueAt: row.dueAt,
    person: acknowledged ? { id: acknowledged.personId, name: names.get(acknowledged.personId) ?? '' } : null,
    comment: acknowledged?.comment ?? null,
    signature: acknowledged ? await signatureById(db, { studyId: id, signatureId: acknowledged.signatureId }) : null,
  }
}

async function summaryOf(db: Queryable, facts: DeviationFacts, now: Date) {
  const { row, newest, entries } = facts
  const registered = registeredAnalysis(facts)
  return {
    id: row.id,
    number: row.number,
    analysis: { id: row.analysis, label: registered.label, importance: registered.importance },
    state: row.state,
    deviationClass: classOf(entries.map(({ entry }) => entry.verdict.word), isOverruled(facts)),
    verdict: newest.entry.verdict,
    stepLabel: stepLabel(registered, newest.entry.verdict),
    binding: newest.extract.id === facts.bindingExtract,
    openedAt: row.openedAt,
    acknowledgement: await acknowledgementView(db, facts, now),
  }
}

/**
 * Prerequisites that failed, as far as they may be named; null when none of them may be and one at least stays
 * behind the blind.
 */
function failedPrerequisites({ seen }: DeviationFacts) {
  const switches = seen.prerequisites.filter(({ consequence }) => consequence === 'switch')
  const failed = switches.filter(({ verdict }) => verdict === 'not-met')
  if (failed.length === 0 && switches.some(({ verdict }) => verdict === 'held')) return null
  return failed.map(({ kind }) => ({ kind, label: say('en', `plan.kinds.${kind}`) }))
}

async function settlementView(db: Queryable, studyId: StudyId, row: SettlementRow) {
  const names = await namesOf(db, [row.settledBy, ...(row.secondBy ? [row.secondBy] : [])])
  const nameOf = (id: string) => names.get(id) ?? ''
  const { secondBy, secondAt, secondSignatureId } = row
  const second = secondBy !== null && secondAt !== null && secondSignatureId !== null
    ? { by: { id: secondBy, name: nameOf(secondBy) }, at: secondAt, signature: await signatureById(db, { studyId, signatureId: secondSignatureId }) }
    : null
  return {
    kind: row.kind, note: row.note, at: row.at, by: { id: row.settledBy, name: nameOf(row.settledBy) }, second,
    signature: await signatureById(db, { studyId, signatureId: row.signatureId }),
  }
}

const entryView = ({ entry: { verdict, releasedAt }, extract }: DeviationFacts['entries'][number], { check: { plan: { document } } }: DeviationFacts, registered: PlannedAnalysis) => ({
  extract: { id: extract.id, number: extract.number, title: extractTitle(extract, document), cutOff: extract.cutOff },
  verdict, stepLabel: stepLabel(registered, verdict), releasedAt,
})

/** What may be settled, by the newest verdict and the events of the study. */
export const allowedNow = ({ row, newest, seen, study: { blindBrokenAt } }: DeviationFacts) => settlementsAllowed({
  state: row.state, word: newest.entry.verdict.word, dependsOnArms: seen.dependsOnArms,
  atDecisionPoint: newest.extract.standing === 'decision-point', blindBroken: blindBrokenAt !== null,
})

async function newestMemo(db: Queryable, deviationId: DeviationAddress['deviationId']) {
  const rows = await db.select({ id: memo.id, number: memo.number, state: memo.state }).from(memo).where(eq(memo.deviationId, deviationId)).orderBy(asc(memo.number))
  return rows[rows.length - 1] ?? null
}

/** One deviation as every member reads it: made of what is everybody's alone, so it is the same for all. */
export async function viewDeviation(db: Queryable, address: DeviationAddress, now = new Date()) {
  const facts = await deviationFacts(db, address)
  const { check: { plan } } = facts
  const registered = registeredAnalysis(facts)
  return {
    ...await summaryOf(db, facts, now),
    planVersion: plan.version,
    planHash: plan.hash,
    entries: facts.entries.map(entry => entryView(entry, facts, registered)),
    failed: failedPrerequisites(facts),
    planned: { method: registered.method, summaryMeasure: registered.summaryMeasure },
    settlements: await Promise.all(facts.settlements.map(row => settlementView(db, address.studyId, row))),
    settlementsAllowed: allowedNow(facts),
    memo: await newestMemo(db, address.deviationId),
  }
}

export async function listDeviations(db: Queryable, { studyId }: { studyId: StudyId }, now = new Date()) {
  const rows = await db.select({ id: deviation.id }).from(deviation).where(eq(deviation.studyId, studyId)).orderBy(asc(deviation.number))
  const deviations = []
  for (const { id } of rows) deviations.push(await summaryOf(db, await deviationFacts(db, { studyId, deviationId: id }), now))
  return { deviations }
}
