import type { Fallback, PlannedAnalysis } from '#shared/plan/analysisSchema'
import type { Prerequisite, Requirement } from '#shared/plan/prerequisiteSchema'
import type { Plan } from '#shared/plan/schema'

// Plans over open data: R's sleep (Student 1908), PlantGrowth (Dobson 1983) and InsectSprays (Beall 1942),
// transcribed in data/*.csv. The generator scripts/reference/decision.R compares the files with R's.

const strict = { tooFewData: null, procedureUndefined: null }
const bySize = (limit: number, reading: 'estimate' | 'lower-limit' | 'by-n') => ({ measure: 'skewness', limit, reading } as const)
const shapiroWilk = { procedure: 'shapiro-wilk', level: 0.05 } as const

function normality(quantity: 'residuals' | 'residuals-by-own-sd' | 'values-within-arms' | 'differences', size: ReturnType<typeof bySize> | null): Requirement {
  return { id: 'normality', kind: 'normality', quantity, limits: { size, significance: shapiroWilk, broken: 'both' }, minimum: 8, multiplicity: 'none', otherReading: strict }
}

const spread: Requirement = {
  id: 'spread', kind: 'equal-spread', quantity: 'values-within-arms',
  limits: { size: null, significance: { procedure: 'brown-forsythe', level: 0.05 }, broken: 'either' }, minimum: 8, otherReading: strict,
}
const asSwitch = (requirement: Requirement): Prerequisite => ({ ...requirement, onFailure: 'switch' })
const missing: Prerequisite = { id: 'missing', kind: 'missing-values', scope: 'all-arms', most: 0.1, onFailure: 'hold' }

const common = {
  importance: 'primary', estimand: null, analysisSet: 'FAS', recordSelection: null, nullValue: 0, direction: 'two-sided', alpha: 0.05, notAssessableLeadsTo: null,
} as const

function planOf(number: string, visits: string[], arms: string[], unit: string, endpoint: string, over: Pick<Plan, 'blinding' | 'analyses'>): Plan {
  return {
    format: 'stipule-plan/1',
    protocol: { number, version: '1.0', title: `Open data: ${number}` },
    arms: arms.map(id => ({ id, label: id.length === 1 ? `Spray ${id}` : `Arm ${id}`, ratio: 1 })),
    visits: visits.map(id => ({ id, label: id })),
    analysisSets: [{ id: 'FAS', label: 'All', column: 'FASFL', value: 'Y' }],
    endpoints: [{ id: endpoint, label: endpoint, unit, possible: { min: null, max: null }, plausible: { min: null, max: null }, derivation: 'none' }],
    looks: [], decisionPoint: { name: 'Lock', expectedSubjects: 10 },
    release: { armDependent: 'decision-point', namesFailed: false }, acknowledger: { email: null, days: 7 }, screens: [],
    ...over,
  }
}

const within: PlannedAnalysis = {
  ...common, id: 'LEVEL', label: 'Extra sleep, by a level alone', endpoint: 'EXTRA', comparison: { kind: 'occasions', first: 'Drug 1', second: 'Drug 2' },
  method: 'paired-t', summaryMeasure: 'mean-of-differences', prerequisites: [asSwitch(normality('differences', null)), missing],
  fallbacks: [{
    id: 'SIGNED-RANK', method: 'wilcoxon-signed-rank', transformation: null, summaryMeasure: 'pseudomedian-of-differences', trigger: { kind: 'any' },
    prerequisites: [{ id: 'symmetry', kind: 'symmetry', quantity: 'differences', limits: { size: bySize(1, 'lower-limit') }, minimum: 8, otherReading: strict }],
  }],
}

export const sleepPlan = planOf('SLEEP', ['Drug 1', 'Drug 2'], ['ALL'], 'h', 'EXTRA', {
  blinding: 'open-label',
  analyses: [within, { ...within, id: 'BOTH', label: 'Extra sleep, by size and level', prerequisites: [asSwitch(normality('differences', bySize(1, 'by-n'))), missing] }],
})

const welch: Fallback = { id: 'WELCH', method: 'welch-t', transformation: null, summaryMeasure: 'difference-of-means', trigger: { kind: 'exactly', of: ['spread'] }, prerequisites: [] }
const bothSpreads: Requirement = { ...spread, limits: { size: { measure: 'sd-ratio', limit: 1.5, reading: 'estimate' }, significance: { procedure: 'brown-forsythe', level: 0.05 }, broken: 'either' } }

export const plantPlan = planOf('PLANTS', ['Harvest'], ['ctrl', 'trt1', 'trt2'], 'g', 'WEIGHT', {
  blinding: 'open-label',
  analyses: [
    {
      ...common, id: 'ALL', label: 'Yield', endpoint: 'WEIGHT', method: 'one-way-anova', summaryMeasure: 'differences-among-means',
      comparison: { kind: 'arms', arms: ['ctrl', 'trt1', 'trt2'], contrast: 'global', control: null, adjustment: 'none', visit: 'Harvest' },
      prerequisites: [
        asSwitch(normality('residuals-by-own-sd', bySize(1, 'by-n'))), asSwitch(spread), missing,
        { ...normality('residuals', null), id: 'plain-residuals', onFailure: 'reported-only' },
        { ...normality('values-within-arms', null), id: 'within', onFailure: 'reported-only' },
      ],
      fallbacks: [],
    },
    {
      ...common, id: 'PAIR', label: 'Yield, two treatments', endpoint: 'WEIGHT', method: 'two-sample-t', summaryMeasure: 'difference-of-means',
      comparison: { kind: 'arms', arms: ['trt1', 'trt2'], contrast: 'one', control: null, adjustment: 'none', visit: 'Harvest' },
      prerequisites: [asSwitch(normality('residuals-by-own-sd', bySize(1, 'by-n'))), asSwitch(bothSpreads)], fallbacks: [welch],
    },
  ],
})

const logStep = (shift: number): Fallback => ({
  id: 'LOG', method: 'planned-after-log', summaryMeasure: 'ratios-among-geometric-means', trigger: { kind: 'at-least', of: ['normality'] },
  transformation: { kind: 'log', base: '10', shift, acts: 'before-derivation', source: 'Counts of insects, as Beall transformed them' },
  prerequisites: [{ id: 'positive', kind: 'positive-values' }, normality('residuals', null), spread],
})
const insects = (id: string, shift: number): PlannedAnalysis => ({
  ...common, id, label: id, endpoint: 'COUNT', method: 'one-way-anova', summaryMeasure: 'differences-among-means',
  comparison: { kind: 'arms', arms: ['A', 'B', 'C', 'D', 'E', 'F'], contrast: 'global', control: null, adjustment: 'none', visit: 'Day 1' },
  prerequisites: [asSwitch(normality('residuals', null)), asSwitch(spread), missing],
  fallbacks: [
    { id: 'WELCH', method: 'welch-anova', transformation: null, summaryMeasure: 'differences-among-means', trigger: { kind: 'exactly', of: ['spread'] }, prerequisites: [] },
    logStep(shift),
    { id: 'RANKS', method: 'kruskal-wallis', transformation: null, summaryMeasure: 'probability-of-larger-than-all', trigger: { kind: 'any' }, prerequisites: [spread] },
  ],
})

export const insectPlan = planOf('INSECTS', ['Day 1'], ['A', 'B', 'C', 'D', 'E', 'F'], '1', 'COUNT', {
  blinding: 'blinded', analyses: [insects('SHIFTED', 1), insects('UNSHIFTED', 0)],
})
