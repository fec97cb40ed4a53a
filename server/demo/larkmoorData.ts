import exp from '@stdlib/math-base-special-exp'
import type { NormalSource } from './source'

/** How many subjects have been enrolled and seen at week 12 when each extract is cut. */
export const LARKMOOR_CUTS = [
  { name: 'larkmoor-204-look-1.csv', cutOff: '2026-04-02', purpose: 'interim', subjects: 61, diariesOutstanding: 14 },
  { name: 'larkmoor-204-look-2.csv', cutOff: '2026-05-07', purpose: 'interim', subjects: 118, diariesOutstanding: 4 },
  { name: 'larkmoor-204-lock.csv', cutOff: '2026-06-11', purpose: 'database-lock', subjects: 144, diariesOutstanding: 3 },
] as const

const ARMS = ['HIGH', 'LOW', 'PBO'] as const
type ArmId = typeof ARMS[number]

interface Subject {
  readonly id: string
  readonly site: string
  readonly arm: ArmId
  readonly cough: readonly [baseline: number, week12: number]
  readonly crp: readonly [baseline: number, week12: number]
  readonly fev: readonly [baseline: number, week12: number]
  readonly rescue: number
}

/** Permuted blocks of six: two of each arm in an order drawn for the block. */
function allocate(count: number, source: NormalSource): ArmId[] {
  const arms: ArmId[] = []
  while (arms.length < count) {
    const block: ArmId[] = [...ARMS, ...ARMS]
    for (let i = block.length - 1; i > 0; i--) {
      const j = Math.floor(source.uniform() * (i + 1));
      [block[i], block[j]] = [block[j]!, block[i]!]
    }
    arms.push(...block)
  }
  return arms.slice(0, count)
}

const rounded = (value: number, digits: number) => Number(value.toFixed(digits))

/** Subjects enrolled after look 2 in the high-dose arm vary far more: some respond, some do not at all. */
const LATE = 118

function coughOf(arm: ArmId, index: number, source: NormalSource): readonly [number, number] {
  const baseline = 46 + 7 * source.normal()
  const spread = arm === 'HIGH' && index >= LATE ? 21 : 6.5
  const shift = arm === 'HIGH' ? -9 : arm === 'LOW' ? -5 : -2
  return [rounded(Math.max(4, baseline), 1), rounded(Math.max(0, baseline + shift + spread * source.normal()), 1)]
}

function rescueOf(arm: ArmId, source: NormalSource): number {
  const none = source.uniform() < 0.2
  const size = exp((arm === 'LOW' ? 2.5 : 1.2) + (arm === 'LOW' ? 0.9 : 0.7) * source.normal())
  return none ? 0 : Math.round(Math.min(size, 110))
}

function makeSubjects(source: NormalSource): Subject[] {
  return allocate(144, source).map((arm, index) => {
    const crpLevel = 1.1 + 0.5 * source.normal()
    const fev = 2.7 + 0.45 * source.normal()
    return {
      id: `LK204-${String(index + 1).padStart(4, '0')}`,
      site: `S${String(1 + Math.floor(source.uniform() * 8)).padStart(2, '0')}`,
      arm,
      cough: coughOf(arm, index, source),
      crp: [rounded(exp(crpLevel + 0.6 * source.normal()) + 0.1, 1), rounded(exp(crpLevel - (arm === 'HIGH' ? 0.3 : 0) + 0.75 * source.normal()) + 0.1, 1)],
      fev: [rounded(fev, 2), rounded(fev + 0.05 + 0.22 * source.normal(), 2)],
      rescue: rescueOf(arm, source),
    }
  })
}

const HEADER = 'STUDYID,USUBJID,SITEID,PARAMCD,AVISIT,AVAL,BASE,AVALU,DTYPE,FASFL,ANL01FL'

function rowsOf(subject: Subject, diaryOutstanding: boolean): string[] {
  const row = (code: string, visit: string, value: number | '', base: number | '', unit: string) =>
    ['LARKMOOR-204', subject.id, subject.site, code, visit, value, base, unit, '', 'Y', 'Y'].join(',')
  const pair = (code: string, [baseline, week12]: readonly [number, number], unit: string) =>
    [row(code, 'Baseline', baseline, baseline, unit), row(code, 'Week 12', week12, baseline, unit)]
  return [
    ...pair('COUGH', subject.cough, '/h'),
    ...pair('CRPHS', subject.crp, 'mg/L'),
    ...pair('FEV1', subject.fev, 'L'),
    row('RESCUE', 'Week 12', diaryOutstanding ? '' : subject.rescue, '', '1'),
  ]
}

/** The three extracts as CSV and the allocation list, drawn from one seeded source. */
export function larkmoorFiles(source: NormalSource): { extracts: string[], allocation: string } {
  const subjects = makeSubjects(source)
  const extracts = LARKMOOR_CUTS.map((cut) => {
    const seen = subjects.slice(0, cut.subjects)
    const lines = seen.flatMap((subject, index) => rowsOf(subject, index >= cut.subjects - cut.diariesOutstanding))
    return `${[HEADER, ...lines].join('\n')}\n`
  })
  const allocation = ['USUBJID,TRT01P,TRT01A', ...subjects.map(({ id, arm }) => `${id},${arm},${arm}`)].join('\n')
  return { extracts, allocation: `${allocation}\n` }
}
