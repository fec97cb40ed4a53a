import type { StudyView } from '../../shared/contract/studies'
import type { Plan } from '../../shared/plan/schema'
import { say } from '../../shared/wording/say'

type StudyFacts = Pick<StudyView, 'protocolNumber' | 'title'>

/**
 * The document that a first draft begins with: what almost every plan has, and nothing that only the trial
 * knows. It is incomplete on purpose; its issues tell what is missing.
 */
export const startingPlan = ({ protocolNumber, title }: StudyFacts): Omit<Plan, 'decisionPoint'> & { decisionPoint: { name: string } } => ({
  format: 'stipule-plan/1',
  protocol: { number: protocolNumber, version: '1.0', title },
  blinding: 'blinded',
  arms: [],
  visits: [{ id: 'Baseline', label: say('en', 'plan.start.baseline') }],
  analysisSets: [{ id: 'FAS', label: say('en', 'plan.start.fullAnalysisSet'), column: 'FASFL', value: 'Y' }],
  endpoints: [],
  looks: [],
  decisionPoint: { name: say('en', 'plan.start.databaseLock') },
  release: { armDependent: 'decision-point', namesFailed: false },
  acknowledger: { email: null, days: 10 },
  screens: [
    { id: 'IMPOSSIBLE', kind: 'impossible-value', action: 'hold' },
    { id: 'DUPLICATE', kind: 'duplicate-key', action: 'hold' },
    { id: 'IMPLAUSIBLE', kind: 'implausible-value', action: 'warn' },
  ],
  analyses: [],
})
