import { dayNumber, lookWindow } from '../plan/calendar'
import type { Look, Plan } from '../plan/schema'
import type { ExtractIdentity } from './report'

export type Standing = Exclude<ExtractIdentity['standing'], 'outside-ledger'>

/** An extract accepted before, withdrawn ones included: it was seen as that look. */
export interface EarlierExtract { readonly standing: Standing, readonly look: string | null }

/** The look in whose window a cut-off date lies; windows do not overlap. */
function lookAt({ looks }: Plan, cutOff: string): Look | undefined {
  const day = dayNumber(cutOff)
  return looks.find((look) => {
    const { first, last } = lookWindow(look)
    return first <= day && day <= last
  })
}

/**
 * What an extract is in the plan's schedule. The first accepted one in a look's window is that look, a later
 * one a re-cut of it; the locked database is the decision point whatever its date.
 */
export function standing(plan: Plan, earlier: readonly EarlierExtract[], cutOff: string, purpose: ExtractIdentity['purpose']): EarlierExtract {
  if (purpose === 'database-lock') return { standing: 'decision-point', look: null }
  const look = lookAt(plan, cutOff)
  if (look === undefined) return { standing: 'unscheduled', look: null }
  const taken = earlier.some(extract => extract.standing === 'look' && extract.look === look.id)
  return { standing: taken ? 're-cut' : 'look', look: look.id }
}

type Place = Pick<ExtractIdentity, 'purpose' | 'look' | 'cutOff'>

/**
 * How many subjects are expected in an extract. Outside every window: those of the last look whose planned
 * cut-off has passed, before the first look those of the first.
 */
export function subjectsExpected(plan: Plan, { purpose, look, cutOff }: Place): number {
  const { looks, decisionPoint } = plan
  if (purpose === 'database-lock' || (look === null && cutOff === null)) return decisionPoint.expectedSubjects
  const named = looks.find(({ id }) => id === look) ?? (cutOff === null ? undefined : lookAt(plan, cutOff))
  const passed = looks.filter(each => cutOff !== null && each.cutOff <= cutOff)
  return (named ?? passed[passed.length - 1] ?? looks[0] ?? decisionPoint).expectedSubjects
}
