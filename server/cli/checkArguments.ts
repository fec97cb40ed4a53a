import { parseArgs } from 'node:util'
import { dateText } from '../../shared/plan/parts'

/** Input that cannot be used; exit code 2, with its place named. */
export class BadInput extends Error {}

export interface CheckArguments {
  readonly plan: string
  readonly extract: string
  readonly allocation: string | null
  /** The reader counts as cleared for arms. */
  readonly arms: boolean
  readonly json: boolean
  readonly cutOff: string | null
  readonly purpose: 'interim' | 'database-lock'
}

export const USAGE = 'check --plan plan.json --extract data.csv [--allocation list.csv] [--arms] [--json] [--cut-off YYYY-MM-DD] [--purpose interim|database-lock]'

const OPTIONS = {
  'plan': { type: 'string' },
  'extract': { type: 'string' },
  'allocation': { type: 'string' },
  'arms': { type: 'boolean', default: false },
  'json': { type: 'boolean', default: false },
  'cut-off': { type: 'string' },
  'purpose': { type: 'string', default: 'interim' },
} as const

function parsed(args: readonly string[]) {
  try {
    return parseArgs({ args: [...args], options: OPTIONS, strict: true }).values
  }
  catch (error) {
    throw new BadInput(`${error instanceof Error ? error.message : String(error)}\n${USAGE}`)
  }
}

/** @throws {BadInput} naming the option. */
export function readArguments(args: readonly string[]): CheckArguments {
  const { plan, extract, allocation = null, arms, json, 'cut-off': cutOff = null, purpose } = parsed(args)
  if (plan === undefined) throw new BadInput(`--plan is missing\n${USAGE}`)
  if (extract === undefined) throw new BadInput(`--extract is missing\n${USAGE}`)
  if (cutOff !== null && !dateText.safeParse(cutOff).success) throw new BadInput(`--cut-off is no date: ${cutOff}`)
  if (purpose !== 'interim' && purpose !== 'database-lock') throw new BadInput(`--purpose is interim or database-lock, not ${purpose}`)
  return { plan, extract, allocation, arms, json, cutOff, purpose }
}
