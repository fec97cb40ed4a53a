import { createHash } from 'node:crypto'
import { createReadStream } from 'node:fs'
import { open, readFile } from 'node:fs/promises'
import type { Finding } from '../../shared/contract/extracts'
import type { Allocation, ExtractColumns } from '../../shared/decision/columns'
import { parsePlan } from '../../shared/plan/parsePlan'
import type { Plan } from '../../shared/plan/schema'
import { catalogue } from '../../shared/wording/catalogue'
import { say } from '../../shared/wording/say'
import { plannedArms, readAllocation } from '../readers/allocationList'
import { findFault, proposeMapping, readCsvExtract, readHead } from '../readers/extractFile'
import { undecidedRoles } from '../readers/mapping'
import { findTreatmentColumn } from '../readers/treatment'
import { BadInput } from './checkArguments'

/** Enough for header and sample, whatever the size of the file. */
const HEAD_BYTES = 4 * 1024 * 1024

async function readable(path: string): Promise<Buffer> {
  const file = await open(path).catch((error: NodeJS.ErrnoException) => {
    throw new BadInput(`${path}: cannot be read (${error.code ?? 'unknown'})`)
  })
  try {
    const { bytesRead, buffer } = await file.read(Buffer.alloc(HEAD_BYTES), 0, HEAD_BYTES, 0)
    return buffer.subarray(0, bytesRead)
  }
  finally {
    await file.close()
  }
}

const hasWords = (code: string): boolean => code in catalogue.en.extract.findings

function worded({ code, row, column, params }: Finding): string {
  const place = [row === null ? null : `row ${row}`, column === null ? null : `column ${column}`].filter(part => part !== null).join(', ')
  const what = hasWords(code) ? say('en', `extract.findings.${code}`, params) : code
  return place ? `${place}: ${what}` : what
}

const refusal = (path: string, findings: readonly Finding[]) =>
  new BadInput(findings.filter(({ severity }) => severity === 'refuse').slice(0, 20).map(finding => `${path}: ${worded(finding)}`).join('\n'))

/** @throws {BadInput} with the place of each issue. */
export async function readPlanFile(path: string): Promise<Plan> {
  await readable(path)
  let document: unknown
  try {
    document = JSON.parse(await readFile(path, 'utf8'))
  }
  catch {
    throw new BadInput(`${path}: is not JSON`)
  }
  const result = parsePlan(document)
  if (result.ok) return result.plan
  throw new BadInput(result.issues.slice(0, 20).map(({ pointer, code, params = {} }) => {
    const words = Object.fromEntries(Object.entries(params).map(([key, value]) => [key, typeof value === 'object' ? value.join(', ') : value]))
    return `${path}: ${pointer || '/'}: ${code in catalogue.en.plan.issues ? say('en', `plan.issues.${code}`, words) : code}`
  }).join('\n'))
}

export interface ExtractFile {
  readonly columns: ExtractColumns
  readonly hash: string
  /** Column or columns of the subject, which the allocation list must share. */
  readonly subject: readonly string[]
  readonly warnings: readonly string[]
}

async function hashOf(path: string): Promise<string> {
  const hash = createHash('sha256')
  for await (const chunk of createReadStream(path)) hash.update(chunk as Buffer)
  return hash.digest('hex')
}

/**
 * Reads an extract by its column names, as an upload is read.
 *
 * @param cleared whether the reader may have arms: of a blinded plan nobody else may bring a treatment column.
 * @throws {BadInput} with row and column.
 */
export async function readExtractFile(path: string, plan: Plan, cleared: boolean): Promise<ExtractFile> {
  const bytes = await readable(path)
  const head = await readHead(bytes, bytes.length < HEAD_BYTES)
  if (!head) {
    const fault = await findFault(createReadStream(path))
    throw fault ? refusal(path, [fault]) : new BadInput(`${path}: the header is too long`)
  }
  const treatment = plan.blinding === 'blinded' && !cleared ? findTreatmentColumn(head.header, head.sample, plan.arms) : null
  if (treatment !== null) throw new BadInput(`${path}: column ${treatment}: ${say('en', 'problems.treatment-column')}`)
  const { complete, suggested, refused } = proposeMapping(plan, head, null)
  if (refused.length > 0) throw refusal(path, refused)
  if (complete === null) throw new BadInput(`${path}: row 1: these columns cannot be told by their names: ${undecidedRoles(plan, suggested).join(', ')}`)
  const { columns, findings } = await readCsvExtract(createReadStream(path), plan, complete)
  if (columns === null) throw refusal(path, findings.list)
  return { columns, hash: await hashOf(path), subject: complete.subject, warnings: findings.list.map(worded) }
}

/** @throws {BadInput} with the row of an unknown arm or a subject given twice. */
export async function readAllocationFile(path: string, plan: Plan, subject: readonly string[]): Promise<{ subjects: Allocation, hash: string }> {
  await readable(path)
  const { subjects, findings } = await readAllocation(createReadStream(path), plan, subject)
  if (findings.counts.refuse > 0) throw refusal(path, findings.list)
  return { subjects: plannedArms(subjects), hash: await hashOf(path) }
}
