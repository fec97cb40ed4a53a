import type { Figure, PlotData, SeenPrerequisite, SeenStep } from '#shared/decision/report'
import type { MemoContent, MemoSignature } from '#shared/memo/content'
import { larkmoorPlan } from '../../server/demo/larkmoorPlan'
import { registeredWords } from '../../server/memo/registeredWords'
import type { Say } from '../../server/memo/words'

const hash = (seed: string) => seed.repeat(64).slice(0, 64)

const signature = (name: string, meaning: string, at: string, role = 'biostatistician'): MemoSignature => ({ name, role, meaning, at, hash: hash('4f0a9c') })

const figure = (part: Partial<Figure> & Pick<Figure, 'measure'>): Figure =>
  ({ value: null, lower: null, upper: null, pValue: null, adjustedP: null, df1: null, df2: null, limit: null, broken: null, ...part })

const shape: SeenPrerequisite = {
  prerequisite: 'normal-residuals', kind: 'normality', quantity: 'residuals-by-own-sd', consequence: 'switch', dependsOnArms: true,
  verdict: 'not-met', reason: null, samples: [], figures: [],
}
const spread: SeenPrerequisite = { ...shape, prerequisite: 'equal-spread', kind: 'equal-spread', quantity: 'values-within-arms' }
const missing: SeenPrerequisite = {
  prerequisite: 'missing', kind: 'missing-values', quantity: null, consequence: 'hold', dependsOnArms: false, verdict: 'met', reason: null, samples: [],
  figures: [figure({ measure: 'share-missing', value: 0.0347, limit: 0.15, broken: false })],
}

/** Figures as an arm-free analysis shows them. */
export const openFigures: SeenPrerequisite = {
  ...shape, dependsOnArms: false, quantity: 'differences',
  samples: [{ arm: null, n: 48, broken: true, figures: [
    figure({ measure: 'skewness', value: -1.2345, lower: -1.91, upper: -0.56, limit: 1, broken: true }),
    figure({ measure: 'shapiro-wilk', value: 0.8712, pValue: 0.00004, limit: 0.05, broken: true }),
  ] }],
}

const step = (id: string, method: SeenStep['method'], part: Partial<SeenStep>): SeenStep => ({
  step: id, method, summaryMeasure: 'differences-among-means', changesQuestion: false, triggered: true, outcome: 'not-reached', reason: null, prerequisites: [], ...part,
})

const required = (prerequisite: SeenPrerequisite, verdict: SeenPrerequisite['verdict']): SeenPrerequisite => ({ ...prerequisite, consequence: 'required', verdict })

const positive: SeenPrerequisite = {
  ...missing, prerequisite: 'positive', kind: 'positive-values', consequence: 'required', figures: [figure({ measure: 'not-positive', value: 0, limit: 0, broken: false })],
}

const quantiles = Array.from({ length: 60 }, (_, index) => {
  const at = -2.1 + 4.2 * index / 59
  return { theoretical: at, value: 1.8 * at + 0.5 * at * at - 0.4, lower: 2 * at - 0.7 - 0.3 * Math.abs(at), upper: 2 * at + 0.7 + 0.3 * Math.abs(at) }
})

const plot: PlotData = {
  quantity: 'values-about-median', unit: 'mg/L', edges: [-4, -3, -2, -1, 0, 1, 2, 3, 4, 5, 6, 7], counts: [3, 12, 34, 41, 24, 13, 8, 4, 2, 2, 1],
  fitted: { mean: 0.3, sd: 2 }, quantiles,
}

/** A blinded memo as the demo study could give one; every value is invented. */
export function memoFixture(say: Say): MemoContent {
  const plan = larkmoorPlan('tomas.ferrant@larkmoor.example')
  const registered = plan.analyses[1]
  if (!registered) throw new Error('the demo plan has lost its second analysis')
  const verdict = { word: 'fallback-applies', step: 'LOG', reason: null, setAside: null, changesQuestion: true } as const
  return {
    format: 'stipule-memo/1', edition: 'blinded', locale: 'en', number: 1, deviationClass: 'foreseen-switch', binding: true,
    study: { protocolNumber: plan.protocol.number, title: plan.protocol.title, sponsor: 'Larkmoor Therapeutics', phase: '2' },
    plan: {
      version: 2, protocolVersion: plan.protocol.version, hash: hash('a91c3e'), signedAt: '2026-03-14T10:05:12.000Z', amendmentReason: 'Expected subjects corrected after protocol amendment 1.',
      declaration: { firstSubjectIn: '2026-01-19', dataSeen: 'none' }, marks: [],
      signatures: [signature('Ines Halloran', 'authored', '2026-03-13T15:44:02.000Z'), signature('Rafael Oduya', 'reviewed', '2026-03-14T10:05:12.000Z')],
    },
    analysis: {
      registered, words: registeredWords(plan, registered, say), endpoint: { label: 'High-sensitivity C-reactive protein', unit: 'mg/L' },
      analysisSet: 'Full analysis set', arms: plan.arms.map(({ id, label }) => ({ id, label })),
    },
    deviation: { number: 1, openedAt: '2026-05-12T09:20:31.000Z' },
    extract: {
      number: 3, title: 'Database lock', standing: 'decision-point', purpose: 'database-lock', cutOff: '2026-06-11', receivedAt: '2026-06-11T16:02:44.000Z',
      uploadedBy: 'Mara Linde', rows: 1152, subjects: 144, contentHash: hash('77be02'),
    },
    verdict: { ...verdict, releasedAt: '2026-06-12T09:14:05.000Z', releasedBy: 'Noor Vasquez' },
    judged: {
      analysis: registered.id, method: registered.method, summaryMeasure: registered.summaryMeasure, dependsOnArms: true, released: true, verdict,
      selection: { rows: 1152, kept: 139, dropped: [{ reason: 'other-parameter', count: 864 }, { reason: 'other-visit', count: 144 }, { reason: 'no-value', count: 5 }], imputed: 0, expected: 144, usable: 139 },
      prerequisites: [shape, spread, missing],
      steps: [
        step('WELCH', 'welch-anova', { triggered: false, outcome: 'not-triggered' }),
        step('LOG', 'planned-after-log', { summaryMeasure: 'ratios-among-geometric-means', changesQuestion: true, outcome: 'applies', prerequisites: [positive, required(shape, 'met'), required(spread, 'met')] }),
        step('RANKS', 'kruskal-wallis', { summaryMeasure: 'probability-of-larger-than-all', changesQuestion: true, triggered: null }),
      ],
      proxy: { n: 139, figures: [figure({ measure: 'skewness', value: 1.62, lower: 1.2, upper: 2.04 })], plot }, byArm: null, plot: null,
    },
    blinding: { atVerdict: 'blind-holds', atSettlement: 'blind-holds', brokenAt: null },
    course: [
      { extract: { number: 2, title: 'Look 2', cutOff: '2026-05-07' }, planVersion: 2, verdict: { word: 'fallback-applies', step: 'LOG', reason: null }, releasedAt: '2026-05-12T09:20:31.000Z', binding: false },
      { extract: { number: 3, title: 'Database lock', cutOff: '2026-06-11' }, planVersion: 2, verdict: { word: 'fallback-applies', step: 'LOG', reason: null }, releasedAt: '2026-06-12T09:14:05.000Z', binding: true },
    ],
    unscheduledLooks: [],
    acknowledgement: {
      state: 'acknowledged', dueAt: '2026-05-22T09:20:31.000Z', asked: ['Tomas Ferrant'], comment: null,
      signature: signature('Tomas Ferrant', 'acknowledged', '2026-05-13T07:31:10.000Z', 'investigator'),
    },
    settlement: {
      kind: 'accept-step', note: 'The registered order was followed; step 2 applies at the decision point as at look 2.',
      signature: signature('Ines Halloran', 'settled', '2026-06-12T11:40:00.000Z'), second: null,
    },
    engine: '1.0.0',
    record: { entry: { sequence: 57, hash: hash('c0ffee') }, treeHead: { size: 58, root: hash('5eed01') }, inclusionProof: [hash('1a2b3c'), hash('9d8e7f'), hash('0b1c2d')] },
    contrast: 'none-computed',
  }
}

export const memoSignatureFixture: MemoSignature = signature('Ines Halloran', 'memo-signed', '2026-06-13T10:02:11.000Z')
