import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import type { Plan } from '#shared/plan/schema'

/** A blinded study of two arms for tests: enough of a plan to have every kind of verdict, and files that decide them. */

const strict = { tooFewData: null, procedureUndefined: null }
const common = { analysisSet: 'FAS', recordSelection: { column: 'ANL01FL', value: 'Y' }, nullValue: 0, direction: 'two-sided', alpha: 0.05, estimand: null } as const
const skewness = { size: { measure: 'skewness', limit: 2, reading: 'estimate' }, significance: null, broken: 'either' } as const

/** Formed with arms: which method stands depends on the allocation. */
const betweenArms: PlannedAnalysis = {
  ...common, id: 'PAIN-T', label: 'Pain between arms', importance: 'primary', endpoint: 'PAIN',
  comparison: { kind: 'arms', arms: ['ACT', 'PBO'], contrast: 'one', control: 'PBO', adjustment: 'none', visit: 'Week 8' },
  method: 'two-sample-t', summaryMeasure: 'difference-of-means',
  prerequisites: [
    { id: 'spread', kind: 'equal-spread', quantity: 'values-within-arms', limits: { size: null, significance: { procedure: 'brown-forsythe', level: 0.05 }, broken: 'either' }, minimum: 10, otherReading: strict, onFailure: 'switch' },
    { id: 'per-arm', kind: 'count', scope: 'per-arm', least: { kind: 'number', n: 5 }, onFailure: 'hold' },
    { id: 'missing', kind: 'missing-values', scope: 'all-arms', most: 0.3, onFailure: 'hold' },
  ],
  fallbacks: [{
    id: 'WELCH', method: 'welch-t', transformation: null, summaryMeasure: 'difference-of-means', trigger: { kind: 'exactly', of: ['spread'] },
    prerequisites: [{ id: 'per-arm', kind: 'count', scope: 'per-arm', least: { kind: 'number', n: 5 } }],
  }],
  notAssessableLeadsTo: 'WELCH',
}

/** Within subjects: everybody may see it at once. */
const withinSubjects: PlannedAnalysis = {
  ...common, id: 'PAIN-P', label: 'Pain within subjects', importance: 'other', endpoint: 'PAIN-RAW',
  comparison: { kind: 'occasions', first: 'Baseline', second: 'Week 8' },
  method: 'paired-t', summaryMeasure: 'mean-of-differences',
  prerequisites: [
    { id: 'normal', kind: 'normality', quantity: 'differences', limits: skewness, minimum: 10, multiplicity: 'none', otherReading: strict, onFailure: 'switch' },
    { id: 'enough', kind: 'count', scope: 'in-all', least: { kind: 'number', n: 5 }, onFailure: 'hold' },
  ],
  fallbacks: [],
  notAssessableLeadsTo: null,
}

const endpoint = { unit: 'mm', possible: { min: 0, max: 100 }, plausible: { min: 1, max: 99 } } as const

export const trialPlan = (protocolNumber: string, changes: Partial<Plan> = {}): Plan => ({
  format: 'stipule-plan/1',
  protocol: { number: protocolNumber, version: '1.0', title: 'An invented trial' },
  blinding: 'blinded',
  arms: [{ id: 'ACT', label: 'Active 20 mg', ratio: 1 }, { id: 'PBO', label: 'Placebo', ratio: 1 }],
  visits: [{ id: 'Baseline', label: 'Baseline' }, { id: 'Week 8', label: 'Week 8' }],
  analysisSets: [{ id: 'FAS', label: 'Full analysis set', column: 'FASFL', value: 'Y' }],
  endpoints: [
    { ...endpoint, id: 'PAIN', label: 'Pain score', derivation: 'change' },
    { ...endpoint, id: 'PAIN-RAW', label: 'Pain score as marked', derivation: 'none' },
  ],
  looks: [{ id: 'LOOK1', name: 'Look 1', cutOff: '2026-04-02', daysBefore: 5, daysAfter: 7, expectedSubjects: 40 }],
  decisionPoint: { name: 'Database lock', expectedSubjects: 40 },
  release: { armDependent: 'each-look', namesFailed: true },
  acknowledger: { email: null, days: 10 },
  screens: [],
  analyses: [betweenArms, withinSubjects],
  ...changes,
})

/** A small generator of its own, so that files never change. */
function uniformSource(seed: number): () => number {
  let state = seed
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0
    return (state + 0.5) / 4294967296
  }
}

export const TRIAL_HEADER = 'USUBJID,SITEID,PARAMCD,AVISIT,AVAL,BASE,AVALU,DTYPE,FASFL,ANL01FL'

export interface TrialFile {
  readonly subjects?: number
  readonly seed?: number
  /** Cells that differ, by subject number from 1. */
  readonly week8?: Readonly<Record<number, string>>
  readonly unit?: string
}

export const subjectId = (number: number) => `T-${String(number).padStart(3, '0')}`

/** Odd subjects vary far more than even ones: whether arms differ in spread is decided by the allocation alone. */
export function trialFile({ subjects = 40, seed = 7, week8 = {}, unit = 'mm' }: TrialFile = {}): string {
  const uniform = uniformSource(seed)
  const normal = () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform())
  const lines = Array.from({ length: subjects }, (_, index) => {
    const number = index + 1
    const start = (55 + 3 * normal()).toFixed(1)
    const end = week8[number] ?? (45 + (number % 2 === 1 ? 12 : 1.5) * normal()).toFixed(1)
    const row = (param: string, visit: string, value: string) => `${subjectId(number)},S${1 + index % 4},${param},${visit},${value},${start},${unit},,Y,Y`
    return [row('PAIN', 'Week 8', end), row('PAIN-RAW', 'Baseline', start), row('PAIN-RAW', 'Week 8', end)].join('\n')
  })
  return `${[TRIAL_HEADER, ...lines].join('\n')}\n`
}

/** Week 8 with one value far from all others: no method that the plan registers fits the differences. */
export const SKEWED: Readonly<Record<number, string>> = { ...Object.fromEntries(Array.from({ length: 20 }, (_, index) => [2 * index + 1, '45'])), 1: '98' }

/** `spread`: the arms differ in spread, so Welch applies; `even`: they do not, so the planned method stands. */
export function trialAllocation(kind: 'spread' | 'even', subjects = 40): string {
  const armOf = (number: number) => (kind === 'spread' ? number % 2 === 1 : number % 4 < 2) ? 'ACT' : 'PBO'
  return `${['USUBJID,TRT01P', ...Array.from({ length: subjects }, (_, index) => `${subjectId(index + 1)},${armOf(index + 1)}`)].join('\n')}\n`
}

/** The same study without a blind: the file carries the arm. */
export function openLabelFile(kind: 'spread' | 'even', file: TrialFile = {}): string {
  const arms = new Map(trialAllocation(kind).trim().split('\n').slice(1).map(line => line.split(',') as [string, string]))
  const [header = '', ...rows] = trialFile(file).trim().split('\n')
  return `${[`${header},TRT01P`, ...rows.map(row => `${row},${arms.get(row.split(',')[0] ?? '') ?? ''}`)].join('\n')}\n`
}
