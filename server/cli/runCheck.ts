import { release } from '../../shared/blinding/release'
import { contentHash } from '../../shared/decision/contentHash'
import { judge } from '../../shared/decision/judge'
import type { SeenReport } from '../../shared/decision/report'
import type { Plan } from '../../shared/plan/schema'
import { canonicalText } from '../../shared/record/canonical'
import { say } from '../../shared/wording/say'
import { BadInput, readArguments, type CheckArguments } from './checkArguments'
import { readAllocationFile, readExtractFile, readPlanFile } from './checkFiles'
import { reportText } from './checkText'

const STANDS = 0
const BAD_INPUT = 2
const SOMETHING_ELSE = 3
const NOT_ASSESSABLE = 4
const BLINDED = 5

/** What a run says and how it ends. */
export interface CheckRun {
  readonly code: number
  readonly out: string
  readonly errors: readonly string[]
}

async function checked(given: CheckArguments, plan: Plan): Promise<{ report: SeenReport, warnings: readonly string[] }> {
  const { columns, hash, subject, warnings } = await readExtractFile(given.extract, plan, given.arms)
  if (given.allocation !== null && plan.blinding === 'open-label') throw new BadInput('--allocation: in an open-label plan the extract carries the arm')
  const list = given.allocation === null ? null : await readAllocationFile(given.allocation, plan, subject)
  const report = judge({
    plan, columns, queries: {}, allocation: list && { state: 'true', ...list },
    extract: { bytesHash: hash, contentHash: contentHash(columns), cutOff: given.cutOff, purpose: given.purpose, look: null, standing: 'outside-ledger' },
  })
  const state = { openLabel: plan.blinding === 'open-label', blindBroken: false, released: 'none', namesFailed: plan.release.namesFailed, registeredInLedger: false } as const
  return { report: release(report, { cleared: given.arms }, state), warnings }
}

/** Of a blinded plan the code says nothing to someone who is not cleared; what cannot be judged weighs more than what switches. */
function exitCode({ analyses }: SeenReport, tells: boolean): number {
  if (!tells) return BLINDED
  const words = analyses.map(({ verdict }) => verdict.word)
  if (words.includes('not-assessable')) return NOT_ASSESSABLE
  return words.every(word => word === 'planned-method-stands') ? STANDS : SOMETHING_ELSE
}

/**
 * The decision rule without a database: reads the files, judges, and answers through the gate of the blind. The
 * report stands in no ledger.
 *
 * @param args what stands behind `check` on the command line.
 */
export async function runCheck(args: readonly string[]): Promise<CheckRun> {
  try {
    const given = readArguments(args)
    const plan = await readPlanFile(given.plan)
    const { report, warnings } = await checked(given, plan)
    return {
      code: exitCode(report, given.arms || plan.blinding === 'open-label'),
      out: given.json ? `${canonicalText({ ledger: say('en', 'extract.commandLine.outside'), report })}\n` : reportText(plan, report),
      errors: warnings.map(warning => `${given.extract}: ${warning}`),
    }
  }
  catch (error) {
    if (!(error instanceof BadInput)) throw error
    return { code: BAD_INPUT, out: '', errors: [error.message] }
  }
}
