import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import type { Prerequisite, Requirement } from '#shared/plan/prerequisiteSchema'
import type { Plan } from '#shared/plan/schema'

const strict = { tooFewData: null, procedureUndefined: null }

type Of<Kind> = Extract<Requirement, { kind: Kind }>

export const normality: Of<'normality'> = {
  id: 'normality', kind: 'normality', quantity: 'residuals-by-own-sd',
  limits: { size: { measure: 'skewness', limit: 1, reading: 'by-n' }, significance: { procedure: 'shapiro-wilk', level: 0.05 }, broken: 'both' },
  minimum: 8, multiplicity: 'none', otherReading: strict,
}

export const spread: Of<'equal-spread'> = {
  id: 'spread', kind: 'equal-spread', quantity: 'values-within-arms',
  limits: { size: { measure: 'sd-ratio', limit: 1.5, reading: 'estimate' }, significance: { procedure: 'brown-forsythe', level: 0.05 }, broken: 'either' },
  minimum: 5, otherReading: strict,
}

export const missing: Extract<Prerequisite, { kind: 'missing-values' }> = { id: 'missing', kind: 'missing-values', scope: 'all-arms', most: 0.2, onFailure: 'hold' }
export const perArm: Of<'count'> = { id: 'per-arm', kind: 'count', scope: 'per-arm', least: { kind: 'number', n: 5 } }

export const asSwitch = (requirement: Requirement): Prerequisite => ({ ...requirement, onFailure: 'switch' })

/** A two-sample t-test of high dose against placebo with two steps; a sound analysis to be spoilt by a test. */
export const plainAnalysis: PlannedAnalysis = {
  id: 'PAIN', label: 'Pain', importance: 'primary', estimand: null, endpoint: 'VAS', analysisSet: 'FAS', recordSelection: null,
  comparison: { kind: 'arms', arms: ['HIGH', 'PBO'], contrast: 'one', control: 'PBO', adjustment: 'none', visit: 'Week 8' },
  method: 'two-sample-t', summaryMeasure: 'difference-of-means', nullValue: 0, direction: 'two-sided', alpha: 0.05,
  prerequisites: [asSwitch(normality), asSwitch(spread), { ...perArm, onFailure: 'hold' }, missing],
  fallbacks: [
    { id: 'WELCH', method: 'welch-t', transformation: null, summaryMeasure: 'difference-of-means', trigger: { kind: 'exactly', of: ['spread'] }, prerequisites: [perArm] },
    {
      id: 'LOG', method: 'planned-after-log', summaryMeasure: 'ratio-of-geometric-means', trigger: { kind: 'at-least', of: ['normality'] },
      transformation: { kind: 'log', base: 'e', shift: 0, acts: 'before-derivation', source: 'Earlier trial' },
      prerequisites: [{ id: 'positive', kind: 'positive-values' }, normality, spread],
    },
  ],
  notAssessableLeadsTo: 'WELCH',
}

/** A blinded plan of three arms with one endpoint and one analysis. */
export const plainPlan: Plan = {
  format: 'stipule-plan/1',
  protocol: { number: 'PLAIN-1', version: '1.0', title: 'A plain trial' },
  blinding: 'blinded',
  arms: [{ id: 'HIGH', label: 'High dose', ratio: 2 }, { id: 'LOW', label: 'Low dose', ratio: 1 }, { id: 'PBO', label: 'Placebo', ratio: 1 }],
  visits: [{ id: 'Baseline', label: 'Baseline' }, { id: 'Week 8', label: 'Week 8' }],
  analysisSets: [{ id: 'FAS', label: 'Full analysis set', column: 'FASFL', value: 'Y' }],
  endpoints: [{ id: 'VAS', label: 'Pain', unit: 'mm', possible: { min: 0, max: 100 }, plausible: { min: 0, max: 95 }, derivation: 'none' }],
  looks: [
    { id: 'L1', name: 'Look 1', cutOff: '2026-03-01', daysBefore: 5, daysAfter: 7, expectedSubjects: 40 },
    { id: 'L2', name: 'Look 2', cutOff: '2026-06-01', daysBefore: 5, daysAfter: 7, expectedSubjects: 80 },
  ],
  decisionPoint: { name: 'Lock', expectedSubjects: 120 },
  release: { armDependent: 'each-look', namesFailed: false },
  acknowledger: { email: null, days: 7 },
  screens: [{ id: 'IMP', kind: 'impossible-value', action: 'hold' }],
  analyses: [plainAnalysis],
}

/** The plain plan with its analysis changed. */
export const planWith = (change: Partial<PlannedAnalysis>): Plan => ({ ...plainPlan, analyses: [{ ...plainAnalysis, ...change }] })
