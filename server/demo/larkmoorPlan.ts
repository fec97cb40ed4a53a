import type { Plan } from '../../shared/plan/schema'
import type { Prerequisite, Requirement } from '../../shared/plan/prerequisiteSchema'
import type { PlannedAnalysis } from '../../shared/plan/analysisSchema'

/** LARKMOOR-204 is invented: the drug, the company, the people and every figure. */

const strict = { tooFewData: null, procedureUndefined: null }

const normalResiduals = (minimum: number): Requirement => ({
  id: 'normal-residuals', kind: 'normality', quantity: 'residuals-by-own-sd',
  limits: {
    size: { measure: 'skewness', limit: 1, reading: 'by-n' },
    significance: { procedure: 'shapiro-wilk', level: 0.05 },
    broken: 'both',
  },
  minimum, multiplicity: 'none', otherReading: strict,
})

const equalSpread = (minimum: number): Requirement => ({
  id: 'equal-spread', kind: 'equal-spread', quantity: 'values-within-arms',
  limits: { size: null, significance: { procedure: 'brown-forsythe', level: 0.05 }, broken: 'either' },
  minimum, otherReading: strict,
})

const perArm = (n: number): Requirement => ({ id: 'per-arm', kind: 'count', scope: 'per-arm', least: { kind: 'number', n } })
const positive: Requirement = { id: 'positive', kind: 'positive-values' }

const missing: Prerequisite = { id: 'missing', kind: 'missing-values', scope: 'all-arms', most: 0.15, onFailure: 'hold' }

const asSwitch = (requirement: Requirement): Prerequisite => ({ ...requirement, onFailure: 'switch' })
const asHold = (requirement: Requirement): Prerequisite => ({ ...requirement, onFailure: 'hold' })
const asReport = (requirement: Requirement): Prerequisite => ({ ...requirement, onFailure: 'reported-only' })

const common = {
  analysisSet: 'FAS',
  recordSelection: { column: 'ANL01FL', value: 'Y' },
  nullValue: 0,
  direction: 'two-sided',
  alpha: 0.05,
} as const

const logStep = { kind: 'log', base: 'e', shift: 0, acts: 'before-derivation', source: 'LARKMOOR-101, where hs-CRP was lognormal' } as const

const cough: PlannedAnalysis = {
  ...common,
  id: 'COUGH-HIGH', label: 'Evening cough count', importance: 'primary', estimand: 'Treatment policy, change at week 12',
  endpoint: 'COUGH',
  comparison: { kind: 'arms', arms: ['HIGH', 'PBO'], contrast: 'one', control: 'PBO', adjustment: 'none', visit: 'Week 12' },
  method: 'two-sample-t', summaryMeasure: 'difference-of-means',
  prerequisites: [asSwitch(normalResiduals(50)), asSwitch(equalSpread(25)), asHold(perArm(12)), missing],
  fallbacks: [
    {
      id: 'WELCH', method: 'welch-t', transformation: null, summaryMeasure: 'difference-of-means',
      trigger: { kind: 'exactly', of: ['equal-spread'] }, prerequisites: [normalResiduals(20), perArm(10)],
    },
    {
      id: 'RANKS', method: 'mann-whitney', transformation: null, summaryMeasure: 'probability-of-larger',
      trigger: { kind: 'exactly', of: ['normal-residuals'] }, prerequisites: [equalSpread(10), perArm(10)],
    },
  ],
  notAssessableLeadsTo: 'WELCH',
}

const crp: PlannedAnalysis = {
  ...common,
  id: 'CRP-ALL', label: 'hs-CRP', importance: 'key-secondary', estimand: 'Treatment policy, value at week 12',
  endpoint: 'CRPHS',
  comparison: { kind: 'arms', arms: ['HIGH', 'LOW', 'PBO'], contrast: 'global', control: null, adjustment: 'none', visit: 'Week 12' },
  method: 'one-way-anova', summaryMeasure: 'differences-among-means',
  prerequisites: [asSwitch(normalResiduals(30)), asSwitch(equalSpread(15)), asHold(perArm(25)), missing],
  fallbacks: [
    {
      id: 'WELCH', method: 'welch-anova', transformation: null, summaryMeasure: 'differences-among-means',
      trigger: { kind: 'exactly', of: ['equal-spread'] }, prerequisites: [normalResiduals(30), perArm(10)],
    },
    {
      id: 'LOG', method: 'planned-after-log', transformation: logStep, summaryMeasure: 'ratios-among-geometric-means',
      trigger: { kind: 'at-least', of: ['normal-residuals'] }, prerequisites: [positive, normalResiduals(30), equalSpread(15)],
    },
    {
      id: 'RANKS', method: 'kruskal-wallis', transformation: null, summaryMeasure: 'probability-of-larger-than-all',
      trigger: { kind: 'exactly', of: ['normal-residuals'] }, prerequisites: [equalSpread(15), perArm(6)],
    },
  ],
  notAssessableLeadsTo: 'LOG',
}

const fev: PlannedAnalysis = {
  ...common,
  id: 'FEV-HIGH', label: 'FEV₁', importance: 'key-secondary', estimand: 'Treatment policy, value at week 12',
  endpoint: 'FEV1',
  comparison: { kind: 'arms', arms: ['HIGH', 'PBO'], contrast: 'one', control: 'PBO', adjustment: 'none', visit: 'Week 12' },
  method: 'welch-t', summaryMeasure: 'difference-of-means',
  prerequisites: [asReport(normalResiduals(20)), asReport(perArm(10)), { ...missing, onFailure: 'reported-only' }],
  fallbacks: [],
  notAssessableLeadsTo: null,
}

const rescue: PlannedAnalysis = {
  ...common,
  id: 'RESCUE-LOW', label: 'Rescue doses', importance: 'other', estimand: 'While on treatment, weeks 9 to 12',
  endpoint: 'RESCUE',
  comparison: { kind: 'arms', arms: ['LOW', 'PBO'], contrast: 'one', control: 'PBO', adjustment: 'none', visit: 'Week 12' },
  method: 'two-sample-t', summaryMeasure: 'difference-of-means',
  prerequisites: [asSwitch(normalResiduals(30)), asSwitch(equalSpread(15)), asHold(perArm(10)), missing],
  fallbacks: [
    {
      id: 'WELCH', method: 'welch-t', transformation: null, summaryMeasure: 'difference-of-means',
      trigger: { kind: 'exactly', of: ['equal-spread'] }, prerequisites: [normalResiduals(30), perArm(10)],
    },
    {
      id: 'LOG', method: 'planned-after-log', transformation: { ...logStep, source: 'Counts of doses in LARKMOOR-101' }, summaryMeasure: 'ratio-of-geometric-means',
      trigger: { kind: 'at-least', of: ['normal-residuals'] }, prerequisites: [positive, normalResiduals(30), equalSpread(15)],
    },
    {
      id: 'RANKS', method: 'mann-whitney', transformation: null, summaryMeasure: 'probability-of-larger',
      trigger: { kind: 'exactly', of: ['normal-residuals'] }, prerequisites: [equalSpread(15), perArm(6)],
    },
  ],
  notAssessableLeadsTo: null,
}

/** Plan of the blinded demo study; the acknowledger's address is that of its demo account. */
export const larkmoorPlan = (investigator: string): Plan => ({
  format: 'stipule-plan/1',
  protocol: { number: 'LARKMOOR-204', version: '2.0', title: 'Vellorane in adults with chronic refractory cough' },
  blinding: 'blinded',
  arms: [
    { id: 'HIGH', label: 'Vellorane 40 mg', ratio: 1 },
    { id: 'LOW', label: 'Vellorane 15 mg', ratio: 1 },
    { id: 'PBO', label: 'Placebo', ratio: 1 },
  ],
  visits: [{ id: 'Baseline', label: 'Baseline' }, { id: 'Week 12', label: 'Week 12' }],
  analysisSets: [{ id: 'FAS', label: 'Full analysis set', column: 'FASFL', value: 'Y' }],
  endpoints: [
    { id: 'COUGH', label: 'Evening cough count', unit: '/h', possible: { min: 0, max: null }, plausible: { min: 0, max: 120 }, derivation: 'change' },
    { id: 'CRPHS', label: 'High-sensitivity C-reactive protein', unit: 'mg/L', possible: { min: 0, max: null }, plausible: { min: 0.1, max: 200 }, derivation: 'none' },
    { id: 'FEV1', label: 'Forced expiratory volume in 1 second', unit: 'L', possible: { min: 0, max: 8 }, plausible: { min: 0.5, max: 6.5 }, derivation: 'none' },
    { id: 'RESCUE', label: 'Rescue doses', unit: '1', possible: { min: 0, max: null }, plausible: { min: 0, max: 112 }, derivation: 'none' },
  ],
  looks: [
    { id: 'LOOK1', name: 'Look 1', cutOff: '2026-04-02', daysBefore: 5, daysAfter: 7, expectedSubjects: 60 },
    { id: 'LOOK2', name: 'Look 2', cutOff: '2026-05-07', daysBefore: 5, daysAfter: 7, expectedSubjects: 120 },
  ],
  decisionPoint: { name: 'Database lock', expectedSubjects: 144 },
  release: { armDependent: 'each-look', namesFailed: true },
  acknowledger: { email: investigator, days: 10 },
  screens: [
    { id: 'IMPOSSIBLE', kind: 'impossible-value', action: 'hold' },
    { id: 'DUPLICATE', kind: 'duplicate-key', action: 'hold' },
    { id: 'IMPLAUSIBLE', kind: 'implausible-value', action: 'warn' },
  ],
  analyses: [cough, crp, fev, rescue],
})
