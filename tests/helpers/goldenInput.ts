import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import type { Requirement } from '#shared/plan/prerequisiteSchema'
import type { Plan } from '#shared/plan/schema'
import type { ExtractColumns } from '#shared/decision/columns'
import type { JudgeInput } from '#shared/decision/judge'
import { createRandom, type Random } from '#shared/statistics/random/random'
import { standardNormal } from '#shared/statistics/random/variates'
import { asSwitch, missing, normality, perArm, plainAnalysis, plainPlan, spread } from './plainPlan'

const strict = { tooFewData: null, procedureUndefined: null }
const withinArms: typeof normality = {
  id: 'within', kind: 'normality', quantity: 'values-within-arms',
  limits: { size: null, significance: { procedure: 'anderson-darling', level: 0.05 }, broken: 'either' },
  minimum: 8, multiplicity: 'holm', otherReading: strict,
}
const residuals: Requirement = {
  id: 'residuals', kind: 'normality', quantity: 'residuals',
  limits: { size: { measure: 'skewness', limit: 0.5, reading: 'upper-limit' }, significance: null, broken: 'either' },
  minimum: 20, multiplicity: 'none', otherReading: strict,
}
const differences: Requirement = { ...normality, id: 'differences', quantity: 'differences', minimum: 10 }
const symmetry: Requirement = { id: 'symmetry', kind: 'symmetry', quantity: 'differences', limits: { size: { measure: 'skewness', limit: 0.5, reading: 'lower-limit' } }, minimum: 10, otherReading: strict }

const ratio: PlannedAnalysis = {
  ...plainAnalysis, id: 'CRP', label: 'CRP', endpoint: 'CRP', method: 'one-way-anova', summaryMeasure: 'differences-among-means',
  comparison: { kind: 'arms', arms: ['HIGH', 'LOW', 'PBO'], contrast: 'global', control: null, adjustment: 'none', visit: 'Week 8' },
  prerequisites: [asSwitch(withinArms), asSwitch(residuals), asSwitch(spread), { id: 'in-all', kind: 'count', scope: 'in-all', least: { kind: 'share-of-expected', share: 0.5 }, onFailure: 'hold' }, missing],
  fallbacks: [
    { id: 'WELCH', method: 'welch-anova', transformation: null, summaryMeasure: 'differences-among-means', trigger: { kind: 'exactly', of: ['spread'] }, prerequisites: [perArm] },
    {
      id: 'LOG', method: 'planned-after-log', summaryMeasure: 'ratios-among-geometric-means', trigger: { kind: 'at-least', of: ['within'] },
      transformation: { kind: 'log', base: '10', shift: 0.1, acts: 'before-derivation', source: 'Earlier trial' },
      prerequisites: [{ id: 'positive', kind: 'positive-values' }, { ...withinArms, limits: { size: null, significance: { procedure: 'anderson-darling', level: 0.001 }, broken: 'either' } } as Requirement],
    },
    { id: 'RANKS', method: 'kruskal-wallis', transformation: null, summaryMeasure: 'probability-of-larger-than-all', trigger: { kind: 'any' }, prerequisites: [] },
  ],
  notAssessableLeadsTo: 'LOG',
}

const paired: PlannedAnalysis = {
  ...plainAnalysis, id: 'WITHIN', label: 'Within', comparison: { kind: 'occasions', first: 'Baseline', second: 'Week 8' }, method: 'paired-t', summaryMeasure: 'mean-of-differences',
  prerequisites: [asSwitch(differences), { ...missing, most: 0.01 }],
  fallbacks: [{ id: 'RANK', method: 'wilcoxon-signed-rank', transformation: null, summaryMeasure: 'pseudomedian-of-differences', trigger: { kind: 'any' }, prerequisites: [symmetry] }],
  notAssessableLeadsTo: 'RANK',
}

const endpoint = plainPlan.endpoints[0]!
/** Every kind of prerequisite, quantity and reading at work. */
export const goldenPlan: Plan = {
  ...plainPlan,
  endpoints: [{ ...endpoint, plausible: { min: 0, max: 80 } }, { id: 'CRP', label: 'CRP', unit: 'mg/L', possible: { min: 0, max: null }, plausible: { min: null, max: null }, derivation: 'none' }],
  analyses: [plainAnalysis, ratio, paired],
}

const ARMS = ['HIGH', 'LOW', 'HIGH', 'PBO']

interface Line { subject: string, parameter: string, visit: string, value: number }

function linesOf(random: Random, subjects: number): Line[] {
  return Array.from({ length: subjects }, (_, index) => {
    const subject = `G${String(index).padStart(3, '0')}`
    const wide = ARMS[index % 4] === 'HIGH' ? 2.5 : 1
    const baseline = 50 + 6 * standardNormal(random)
    const later = baseline - 4 + 5 * wide * standardNormal(random)
    const skewed = 2 + (1 + standardNormal(random) / 5) * standardNormal(random) ** 2
    const round = (x: number) => Math.round(x * 100) / 100
    const lines = [
      { subject, parameter: 'VAS', visit: 'Baseline', value: round(baseline) },
      { subject, parameter: 'VAS', visit: 'Week 8', value: round(later) },
      { subject, parameter: 'CRP', visit: 'Week 8', value: round(Math.max(0, skewed)) },
    ]
    return index % 11 === 5 ? lines.slice(0, 2) : lines
  }).flat()
}

/** A blinded extract with allocation, always the same. */
export function goldenInput(purpose: 'interim' | 'database-lock'): JudgeInput {
  const lines = linesOf(createRandom(118), purpose === 'interim' ? 44 : 96)
  const columns: ExtractColumns = {
    rows: lines.length, sourceRow: lines.map((_, index) => index + 2), subject: lines.map(each => each.subject), parameter: lines.map(each => each.parameter),
    visit: lines.map(each => each.visit), value: Float64Array.from(lines, each => each.value), baseline: null,
    unit: lines.map(each => (each.parameter === 'VAS' ? 'mm' : 'mg/L')), site: null, imputed: null, arm: null, flags: { FASFL: lines.map(() => 'Y') },
  }
  const ids = [...new Set(columns.subject)]
  return {
    plan: goldenPlan, columns, queries: {},
    allocation: { state: 'true', hash: 'ab'.repeat(32), subjects: Object.fromEntries(ids.map((id, index) => [id, ARMS[index % 4]!])) },
    extract: purpose === 'interim'
      ? { bytesHash: '01'.repeat(32), contentHash: '02'.repeat(32), cutOff: '2026-03-01', purpose, look: 'L1', standing: 'look' }
      : { bytesHash: '03'.repeat(32), contentHash: '04'.repeat(32), cutOff: '2026-09-01', purpose, look: null, standing: 'decision-point' },
  }
}
