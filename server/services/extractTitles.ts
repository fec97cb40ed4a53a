import type { Plan } from '../../shared/plan/schema'
import { say } from '../../shared/wording/say'

interface Placed { readonly standing: string | null, readonly look: string | null, readonly number: number }

/** What an extract is called beside its verdicts: its look, the decision point, or that it was unscheduled. */
export function extractTitle({ standing, look, number }: Placed, { looks, decisionPoint }: Plan): string {
  if (standing === 'decision-point') return decisionPoint.name
  const name = looks.find(({ id }) => id === look)?.name
  if (name === undefined) return say('en', 'deviation.extractTitle.unscheduled', { number })
  return standing === 're-cut' ? say('en', 'deviation.extractTitle.re-cut', { look: name }) : name
}
