/** What somebody may have done before that forbids them a duty now. */
export type EarlierDuty
  = | 'plan.author' | 'extract.upload' | 'deviation.settle' | 'release.sign' | 'overrule.first' | 'clearance.propose' | 'clearance.hold'

/**
 * Duties that may not lie in one hand, on top of the role × action table: for each duty, what whoever takes it
 * must not have done before to the same plan, extract, deviation or clearance.
 */
const SEPARATED = {
  'plan.sign-reviewer': ['plan.author'],
  'allocation.upload': ['extract.upload', 'deviation.settle'],
  'extract.give-reason': ['extract.upload'],
  'query.resolve': ['extract.upload'],
  'deviation.settle': ['extract.upload', 'release.sign'],
  'deviation.settle-second': ['extract.upload', 'release.sign', 'overrule.first'],
  'release.sign': ['deviation.settle'],
  'clearance.propose': ['clearance.hold'],
  'clearance.grant': ['clearance.hold', 'clearance.propose'],
} as const satisfies Record<string, readonly EarlierDuty[]>

export type SeparatedDuty = keyof typeof SEPARATED

/** Who did what before; a duty that nobody has done yet is left out or empty. */
export type Hands<Duty extends SeparatedDuty> = { readonly [Earlier in typeof SEPARATED[Duty][number]]: readonly string[] }

/**
 * @param personId who is about to take the duty.
 * @returns the first earlier duty found in the same hand, or null when the duty may be taken.
 */
export function clash<Duty extends SeparatedDuty>(duty: Duty, personId: string, hands: Hands<Duty>): EarlierDuty | null {
  const doneBy: Partial<Record<EarlierDuty, readonly string[]>> = hands
  return SEPARATED[duty].find(earlier => doneBy[earlier]?.includes(personId)) ?? null
}
