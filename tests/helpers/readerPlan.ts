import type { Plan } from '#shared/plan/schema'

const analysis: Plan['analyses'][number] = {
  id: 'A1', label: 'Pain at week 8', importance: 'primary', estimand: null, endpoint: 'PAIN', analysisSet: 'FAS',
  recordSelection: { column: 'ANL01FL', value: 'Y' },
  comparison: { kind: 'arms', arms: ['ACT', 'PBO'], contrast: 'one', control: 'PBO', adjustment: 'none', visit: 'Week 8' },
  method: 'two-sample-t', summaryMeasure: 'difference-of-means', nullValue: 0, direction: 'two-sided', alpha: 0.05,
  prerequisites: [], fallbacks: [], notAssessableLeadsTo: null,
}

const endpoint: Plan['endpoints'][number] = {
  id: 'PAIN', label: 'Pain score', unit: 'mm', possible: { min: 0, max: 100 }, plausible: { min: null, max: null }, derivation: 'change',
}

/** A small plan for tests of what is read from files: two arms, two visits, two endpoints, one flag of each kind. */
export const readerPlan = (changes: Partial<Plan> = {}): Plan => ({
  format: 'stipule-plan/1',
  protocol: { number: 'BRACKEN-12', version: '1.0', title: 'An invented trial' },
  blinding: 'blinded',
  arms: [{ id: 'ACT', label: 'Active 20 mg', ratio: 1 }, { id: 'PBO', label: 'Placebo', ratio: 1 }],
  visits: [{ id: 'Baseline', label: 'Baseline' }, { id: 'Week 8', label: 'Week 8' }],
  analysisSets: [{ id: 'FAS', label: 'Full analysis set', column: 'FASFL', value: 'Y' }],
  endpoints: [endpoint, { ...endpoint, id: 'CRP', label: 'C-reactive protein', unit: 'µg/mL', derivation: 'none' }],
  looks: [], decisionPoint: { name: 'Database lock', expectedSubjects: 60 },
  release: { armDependent: 'decision-point', namesFailed: false },
  acknowledger: { email: null, days: 10 },
  screens: [], analyses: [analysis],
  ...changes,
})

/** The same plan with a single endpoint that is compared as it stands, at a single visit. */
export const plainReaderPlan = (changes: Partial<Plan> = {}): Plan => readerPlan({
  visits: [{ id: 'Week 8', label: 'Week 8' }],
  endpoints: [{ ...endpoint, derivation: 'none' }],
  analyses: [{ ...analysis, recordSelection: null }],
  ...changes,
})
