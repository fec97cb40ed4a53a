import type { PlannedAnalysis } from '../../shared/plan/analysisSchema'
import type { Plan } from '../../shared/plan/schema'

const strict = { tooFewData: null, procedureUndefined: null }

const walking: PlannedAnalysis = {
  id: 'WALK-CHANGE', label: 'Walking distance', importance: 'primary', estimand: 'Treatment policy, change at month 3',
  endpoint: 'SIXMW', analysisSet: 'FAS', recordSelection: null,
  comparison: { kind: 'arms', arms: ['WALK', 'USUAL'], contrast: 'one', control: 'USUAL', adjustment: 'none', visit: 'Month 3' },
  method: 'two-sample-t', summaryMeasure: 'difference-of-means', nullValue: 0, direction: 'two-sided', alpha: 0.05,
  prerequisites: [
    {
      id: 'normal', kind: 'normality', quantity: 'residuals-by-own-sd',
      limits: { size: { measure: 'skewness', limit: 1, reading: 'by-n' }, significance: { procedure: 'shapiro-wilk', level: 0.05 }, broken: 'both' },
      minimum: 20, multiplicity: 'none', otherReading: strict, onFailure: 'switch',
    },
    {
      id: 'spread', kind: 'equal-spread', quantity: 'values-within-arms',
      limits: { size: { measure: 'sd-ratio', limit: 1.5, reading: 'estimate' }, significance: { procedure: 'brown-forsythe', level: 0.05 }, broken: 'both' },
      minimum: 10, otherReading: strict, onFailure: 'switch',
    },
    { id: 'per-arm', kind: 'count', scope: 'per-arm', least: { kind: 'share-of-expected', share: 0.8 }, onFailure: 'hold' },
  ],
  fallbacks: [{
    id: 'WELCH', method: 'welch-t', transformation: null, summaryMeasure: 'difference-of-means',
    trigger: { kind: 'exactly', of: ['spread'] },
    prerequisites: [{ id: 'per-arm', kind: 'count', scope: 'per-arm', least: { kind: 'number', n: 10 } }],
  }],
  notAssessableLeadsTo: 'WELCH',
}

const grip: PlannedAnalysis = {
  id: 'GRIP-WITHIN', label: 'Grip strength', importance: 'other', estimand: null,
  endpoint: 'GRIP', analysisSet: 'FAS', recordSelection: null,
  comparison: { kind: 'occasions', first: 'Baseline', second: 'Month 3' },
  method: 'paired-t', summaryMeasure: 'mean-of-differences', nullValue: 0, direction: 'two-sided', alpha: 0.05,
  prerequisites: [
    {
      id: 'normal', kind: 'normality', quantity: 'differences',
      limits: { size: { measure: 'skewness', limit: 1, reading: 'by-n' }, significance: { procedure: 'shapiro-wilk', level: 0.05 }, broken: 'both' },
      minimum: 20, multiplicity: 'none', otherReading: strict, onFailure: 'switch',
    },
  ],
  fallbacks: [{
    id: 'SIGNED-RANK', method: 'wilcoxon-signed-rank', transformation: null, summaryMeasure: 'pseudomedian-of-differences',
    trigger: { kind: 'any' },
    prerequisites: [{ id: 'symmetric', kind: 'symmetry', quantity: 'differences', limits: { size: { measure: 'skewness', limit: 0.5, reading: 'estimate' } }, minimum: 20, otherReading: strict }],
  }],
  notAssessableLeadsTo: 'SIGNED-RANK',
}

/** The open-label demo study, invented like the other: one look, the short way from file to verdict. */
export const thorneyPlan = (investigator: string): Plan => ({
  format: 'stipule-plan/1',
  protocol: { number: 'THORNEY-118', version: '1.0', title: 'Supervised walking after hip fracture' },
  blinding: 'open-label',
  arms: [{ id: 'WALK', label: 'Supervised walking', ratio: 1 }, { id: 'USUAL', label: 'Usual care', ratio: 1 }],
  visits: [{ id: 'Baseline', label: 'Baseline' }, { id: 'Month 3', label: 'Month 3' }],
  analysisSets: [{ id: 'FAS', label: 'Full analysis set', column: 'FASFL', value: 'Y' }],
  endpoints: [
    { id: 'SIXMW', label: 'Six-minute walk distance', unit: 'm', possible: { min: 0, max: 900 }, plausible: { min: 30, max: 750 }, derivation: 'change' },
    { id: 'GRIP', label: 'Hand grip strength', unit: 'kg', possible: { min: 0, max: 90 }, plausible: { min: 5, max: 70 }, derivation: 'none' },
  ],
  looks: [{ id: 'LOOK1', name: 'Look 1', cutOff: '2026-09-15', daysBefore: 7, daysAfter: 7, expectedSubjects: 60 }],
  decisionPoint: { name: 'Database lock', expectedSubjects: 120 },
  release: { armDependent: 'each-look', namesFailed: true },
  acknowledger: { email: investigator, days: 14 },
  screens: [
    { id: 'IMPOSSIBLE', kind: 'impossible-value', action: 'hold' },
    { id: 'DUPLICATE', kind: 'duplicate-key', action: 'hold' },
    { id: 'IMPLAUSIBLE', kind: 'implausible-value', action: 'warn' },
  ],
  analyses: [walking, grip],
})
