import { and, asc, eq, isNotNull } from 'drizzle-orm'
import type { BlindStatus, MemoAcknowledgement, MemoContent, MemoExtract, MemoPlan, MemoSettlement, MemoSignature } from '../../shared/memo/content'
import { say } from '../../shared/wording/say'
import { registeredWords } from '../memo/registeredWords'
import type { Queryable } from '../database/client'
import { onlyRow } from '../database/onlyRow'
import { release } from '../database/schema/check'
import type { settlement } from '../database/schema/deviation'
import { person } from '../database/schema/person'
import { plan } from '../database/schema/plan'
import { DomainError } from '../domainError'
import type { DeviationFacts } from './deviationFacts'
import { acknowledgementState, classOf } from './deviationRules'
import { namedInvestigators } from './deviations'
import { registeredAnalysis } from './deviationViews'
import { extractTitle } from './extractTitles'
import { memoRecord } from './memoRecord'
import { printedSignature, printedSignatures } from './printedSignatures'
import { unscheduledExtracts } from './unscheduledExtracts'

type SettlementRow = typeof settlement.$inferSelect

export interface MemoSources {
  readonly facts: DeviationFacts
  readonly settlement: SettlementRow
  readonly number: number
  readonly now: Date
}

async function planPart(db: Queryable, { check: { plan: { id, document } } }: DeviationFacts): Promise<MemoPlan> {
  const row = onlyRow(await db.select().from(plan).where(eq(plan.id, id)))
  if (row.hash === null || row.signedAt === null) throw new DomainError('internal')
  return {
    version: row.version,
    protocolVersion: document.protocol.version,
    hash: row.hash,
    signedAt: row.signedAt.toISOString(),
    amendmentReason: row.amendmentReason,
    declaration: row.declaration,
    marks: row.knowledge?.marks ?? [],
    signatures: await printedSignatures(db, { studyId: row.studyId, subject: id, hash: row.hash }),
  }
}

function analysisPart(facts: DeviationFacts): MemoContent['analysis'] {
  const { check: { plan: { document } } } = facts
  const registered = registeredAnalysis(facts)
  const { comparison } = registered
  const endpoint = document.endpoints.find(({ id }) => id === registered.endpoint)
  return {
    registered,
    words: registeredWords(document, registered, (key, params) => say('en', key, params)),
    endpoint: { label: endpoint?.label ?? registered.endpoint, unit: endpoint?.unit ?? '1' },
    analysisSet: document.analysisSets.find(({ id }) => id === registered.analysisSet)?.label ?? registered.analysisSet,
    arms: comparison.kind === 'arms' ? document.arms.filter(({ id }) => comparison.arms.includes(id)).map(({ id, label }) => ({ id, label })) : [],
  }
}

async function extractPart(db: Queryable, { newest: { extract }, check: { plan: { document } } }: DeviationFacts): Promise<MemoExtract> {
  const uploader = onlyRow(await db.select({ name: person.name }).from(person).where(eq(person.id, extract.uploadedBy)))
  const { contentHash, standing, number, purpose, cutOff, receivedAt, rows, subjects } = extract
  if (contentHash === null || standing === null || rows === null) throw new DomainError('internal')
  return { number, title: extractTitle(extract, document), standing, purpose, cutOff, receivedAt: receivedAt.toISOString(), uploadedBy: uploader.name, rows, subjects, contentHash }
}

async function releaserOf(db: Queryable, { newest: { entry }, row }: DeviationFacts): Promise<string | null> {
  const rows = await db.select({ name: person.name, analyses: release.analyses }).from(release)
    .innerJoin(person, eq(person.id, release.releasedBy))
    .where(and(eq(release.studyId, row.studyId), eq(release.checkId, entry.checkId), isNotNull(release.signatureId)))
    .orderBy(asc(release.releasedAt))
  return rows.find(({ analyses }) => analyses.includes(row.analysis))?.name ?? null
}

function statusAt(moment: Date, { study: { blindBrokenAt }, check: { plan: { document } } }: DeviationFacts): BlindStatus {
  if (document.blinding === 'open-label') return 'open-label'
  return blindBrokenAt !== null && blindBrokenAt.getTime() <= moment.getTime() ? 'blind-broken' : 'blind-holds'
}

async function acknowledgementPart(db: Queryable, { facts: { row, acknowledged, check: { plan: { document } } }, now }: MemoSources): Promise<MemoAcknowledgement> {
  const { email } = document.acknowledger
  const asked = (await namedInvestigators(db, row.studyId, email)).map(({ name }) => name)
  return {
    state: acknowledgementState(acknowledged?.decision ?? null, row.dueAt, now),
    dueAt: row.dueAt.toISOString(),
    asked: asked.length > 0 || email === null ? asked : [email],
    comment: acknowledged?.comment ?? null,
    signature: acknowledged ? await printedSignature(db, { studyId: row.studyId, signatureId: acknowledged.signatureId }) : null,
  }
}

async function settlementPart(db: Queryable, { settlement: { kind, note, studyId, signatureId, secondSignatureId } }: MemoSources): Promise<MemoSettlement> {
  if (kind === 'keep-under-observation' || kind === 'amend-plan') throw new DomainError('internal')
  const second: MemoSignature | null = secondSignatureId === null ? null : await printedSignature(db, { studyId, signatureId: secondSignatureId })
  return { kind, note, signature: await printedSignature(db, { studyId, signatureId }), second }
}

const coursePart = ({ entries, bindingExtract, check: { plan: { document } } }: DeviationFacts): MemoContent['course'] =>
  entries.map(({ entry: { verdict: { word, step, reason }, releasedAt }, extract, planVersion }) => ({
    extract: { number: extract.number, title: extractTitle(extract, document), cutOff: extract.cutOff },
    planVersion, verdict: { word, step, reason }, releasedAt: releasedAt.toISOString(), binding: extract.id === bindingExtract,
  }))

/**
 * Everything that a memo says, composed from what stands now: the same state gives the same content and hash.
 * It is made of the blinded view alone, whoever composes it and whatever has been unblinded since.
 */
export async function composeMemo(db: Queryable, sources: MemoSources): Promise<MemoContent> {
  const { facts, settlement, number } = sources
  const { row, study, newest, seen, check, entries } = facts
  const signatures = [settlement.signatureId, settlement.secondSignatureId, facts.acknowledged?.signatureId ?? null].filter(id => id !== null)
  return {
    format: 'stipule-memo/1',
    edition: check.plan.document.blinding === 'open-label' ? 'open-label' : 'blinded',
    locale: 'en',
    number,
    deviationClass: classOf(entries.map(({ entry }) => entry.verdict.word), settlement.kind === 'overrule' && settlement.secondBy !== null),
    binding: newest.extract.id === facts.bindingExtract,
    study: { protocolNumber: study.protocolNumber, title: study.title, sponsor: study.sponsor, phase: study.phase },
    plan: await planPart(db, facts),
    analysis: analysisPart(facts),
    deviation: { number: row.number, openedAt: row.openedAt.toISOString() },
    extract: await extractPart(db, facts),
    verdict: { ...newest.entry.verdict, releasedAt: newest.entry.releasedAt.toISOString(), releasedBy: await releaserOf(db, facts) },
    judged: seen,
    blinding: {
      atVerdict: statusAt(newest.entry.releasedAt, facts), atSettlement: statusAt(settlement.secondAt ?? settlement.at, facts), brokenAt: study.blindBrokenAt?.toISOString() ?? null,
    },
    course: coursePart(facts),
    unscheduledLooks: await unscheduledExtracts(db, row.studyId),
    acknowledgement: await acknowledgementPart(db, sources),
    settlement: await settlementPart(db, sources),
    engine: check.engine,
    record: await memoRecord(db, row.studyId, signatures),
    contrast: 'none-computed',
  }
}
