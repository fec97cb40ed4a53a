import { and, asc, eq, sql } from 'drizzle-orm'
import type { ColumnMapping } from '../../shared/contract/extracts'
import type { Plan } from '../../shared/plan/schema'
import type { ExtractId } from '../../shared/schemas/domainIds'
import type { StudyId } from '../../shared/schemas/ids'
import type { Queryable } from '../database/client'
import { dataQuery, extract, studyMapping } from '../database/schema/extract'
import { person } from '../database/schema/person'
import { plan } from '../database/schema/plan'
import { DomainError } from '../domainError'
import { proposeMapping } from '../readers/extractFile'
import type { SuggestedMapping } from '../readers/mapping'
import { columnNeeds } from '../readers/needs'
import type { ExtractRow } from './checkedReports'
import { readSignedPlan, signedPlans } from './plans'
import { signaturesOver } from './signatures'
import type { Viewer } from './viewer'

/** The file carries allocation, or nobody can tell whether it does: bytes and their hash are for cleared members. */
export const isSealed = ({ state, columns }: Pick<ExtractRow, 'state' | 'columns'>): boolean => state === 'sealed' || columns.length === 0

const selection = {
  row: extract,
  by: { id: person.id, name: person.name },
  planVersion: plan.version,
  openQueries: sql<number>`(select count(*)::int from ${dataQuery} where ${dataQuery.studyId} = ${extract.studyId}
    and ${dataQuery.extractId} = ${extract.id} and ${dataQuery.state} = 'open')`,
}

const extracts = (db: Queryable) => db.select(selection).from(extract)
  .innerJoin(person, eq(person.id, extract.uploadedBy))
  .innerJoin(plan, and(eq(plan.studyId, extract.studyId), eq(plan.id, extract.planId)))

type Selected = Awaited<ReturnType<typeof extracts>>[number]

function summaryOf({ row, by, planVersion, openQueries }: Selected, document: Plan, { standing: { cleared } }: Viewer) {
  const withheld = document.blinding === 'blinded' && isSealed(row) && !cleared
  return {
    id: row.id,
    number: row.number,
    fileName: row.fileName,
    state: row.state,
    cutOff: row.cutOff,
    purpose: row.purpose,
    standing: row.standing,
    look: document.looks.find(({ id }) => id === row.look)?.name ?? null,
    planVersion,
    size: withheld ? null : row.size,
    rows: row.rows,
    subjects: row.subjects,
    bytesHash: withheld ? null : row.bytesHash,
    contentHash: row.contentHash,
    uploadedBy: by,
    receivedAt: row.receivedAt,
    findings: row.findingCounts,
    openQueries,
  }
}

/** Every extract of a study, in the order in which they came. */
export async function listExtracts(db: Queryable, { studyId, viewer }: { studyId: StudyId, viewer: Viewer }) {
  const plans = await signedPlans(db, studyId)
  const found = await extracts(db).where(eq(extract.studyId, studyId)).orderBy(asc(extract.number))
  return {
    extracts: found.map((selected) => {
      const registered = plans.get(selected.row.planId)
      if (!registered) throw new DomainError('internal')
      return summaryOf(selected, registered.document, viewer)
    }),
  }
}

export async function rememberedMapping(db: Queryable, studyId: StudyId): Promise<ColumnMapping | null> {
  const [row] = await db.select({ mapping: studyMapping.mapping }).from(studyMapping).where(eq(studyMapping.studyId, studyId))
  return row?.mapping ?? null
}

/** A suggestion as a form shows it: every flag that the plan needs is there, empty where no column was found. */
function offered(document: Plan, suggested: SuggestedMapping): SuggestedMapping {
  const flags = columnNeeds(document).flags.map((name): [string, string] => [name, suggested.flags?.[name] ?? ''])
  return { ...suggested, flags: Object.fromEntries(flags) }
}

async function suggestionFor(db: Queryable, { state, columns, preview, studyId }: ExtractRow, document: Plan): Promise<SuggestedMapping | null> {
  if (state !== 'awaiting-mapping') return null
  const { suggested } = proposeMapping(document, { header: columns, sample: preview ?? [] }, await rememberedMapping(db, studyId))
  return offered(document, suggested)
}

async function queriesOf(db: Queryable, { studyId, id }: ExtractRow) {
  const rows = await db.select().from(dataQuery).where(and(eq(dataQuery.studyId, studyId), eq(dataQuery.extractId, id))).orderBy(asc(dataQuery.number))
  return Promise.all(rows.map(async ({ id: queryId, number, screen, endpoint, rows: touched, count, state, openedAt, note }) => {
    const [signature] = note === null ? [] : await signaturesOver(db, { studyId, subject: queryId })
    return {
      id: queryId, number, screen, endpoint, rows: touched, count, state, openedAt,
      resolution: note === null || !signature ? null : { note, signature },
    }
  }))
}

/** Why an extract outside every window is judged; null while nobody has said so, and for all others. */
async function reasonOf(db: Queryable, { studyId, id, standing }: ExtractRow) {
  if (standing !== 'unscheduled') return null
  const signatures = await signaturesOver(db, { studyId, subject: id })
  const given = signatures.find(({ meaning }) => meaning === 'reason-given')
  return given && given.reason !== null ? { text: given.reason, signature: given } : null
}

export interface ExtractAddress { readonly studyId: StudyId, readonly extractId: ExtractId }

/** One extract with what was found in it, as this viewer may see it. */
export async function viewExtract(db: Queryable, { studyId, extractId, viewer }: ExtractAddress & { readonly viewer: Viewer }) {
  const [selected] = await extracts(db).where(and(eq(extract.studyId, studyId), eq(extract.id, extractId)))
  if (!selected) throw new DomainError('not-found')
  const { row } = selected
  const { document } = await readSignedPlan(db, { studyId, planId: row.planId })
  const { refuse, hold, warn } = row.findingCounts
  return {
    ...summaryOf(selected, document, viewer),
    columns: row.state === 'sealed' ? [] : row.columns,
    mapping: row.mapping,
    suggestedMapping: await suggestionFor(db, row, document),
    preview: row.state === 'awaiting-mapping' ? row.preview : null,
    findingList: row.findings,
    findingsLeftOut: refuse + hold + warn - row.findings.length,
    queries: await queriesOf(db, row),
    reason: await reasonOf(db, row),
  }
}
