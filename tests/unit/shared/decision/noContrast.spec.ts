import { readdirSync, readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import type { Requirement } from '#shared/plan/prerequisiteSchema'
import type { Plan } from '#shared/plan/schema'
import type { ExtractColumns } from '#shared/decision/columns'
import { judge } from '#shared/decision/judge'
import type { AnalysisReport } from '#shared/decision/report'
import { createRandom } from '#shared/statistics/random/random'
import { standardNormal } from '#shared/statistics/random/variates'
import { IDENTITY } from '../../../helpers/judgeTrial'
import { asSwitch, normality, plainAnalysis, plainPlan, spread } from '../../../helpers/plainPlan'

const ARMS = ['HIGH', 'LOW', 'PBO']

const over = (quantity: 'residuals' | 'values-within-arms'): Requirement => ({ ...normality, id: quantity, quantity } as Requirement)

/** Every quantity that is formed with arms, in a plan with a step that is reached. */
const plan: Plan = {
  ...plainPlan,
  endpoints: [{ ...plainPlan.endpoints[0]!, possible: { min: null, max: null }, plausible: { min: null, max: null } }],
  analyses: [{
    ...plainAnalysis,
    prerequisites: [asSwitch(normality), asSwitch(spread), asSwitch(over('residuals')), asSwitch(over('values-within-arms'))],
    fallbacks: [{ ...plainAnalysis.fallbacks[0]!, trigger: { kind: 'any' }, prerequisites: [normality, spread, over('residuals'), over('values-within-arms')] }],
  }],
}

/** Ninety subjects; the high-dose arm varies three times as much, so that the spread prerequisite fails. */
function columnsShifted(shifts: Readonly<Record<string, number>>): { columns: ExtractColumns, subjects: Record<string, string> } {
  const random = createRandom(2026)
  const ids = Array.from({ length: 90 }, (_, index) => `S${String(index).padStart(2, '0')}`)
  const subjects = Object.fromEntries(ids.map((id, index) => [id, ARMS[index % 3]!]))
  const noise = ids.map(id => standardNormal(random) * (subjects[id] === 'HIGH' ? 3 : 1))
  const text = (word: string) => ids.map(() => word)
  const columns: ExtractColumns = {
    rows: ids.length, sourceRow: ids.map((_, index) => index + 2), subject: ids, parameter: text('VAS'), visit: text('Week 8'),
    value: Float64Array.from(ids, (id, index) => noise[index]! + (shifts[subjects[id]!] ?? 0)),
    baseline: null, unit: text('mm'), site: null, imputed: null, arm: null, flags: { FASFL: text('Y') },
  }
  return { columns, subjects }
}

function analysisUnder(shifts: Readonly<Record<string, number>>): Omit<AnalysisReport, 'proxy'> {
  const { columns, subjects } = columnsShifted(shifts)
  const [analysis] = judge({ plan, columns, extract: { ...IDENTITY, purpose: 'interim' }, allocation: { state: 'true', hash: null, subjects }, queries: {} }).analyses
  const { proxy, ...rest } = analysis!
  expect(proxy).not.toBeNull()
  return rest
}

type Leaf = readonly [path: string, value: unknown]

const leaves = (node: unknown, path = ''): Leaf[] =>
  (typeof node === 'object' && node !== null ? Object.entries(node).flatMap(([key, value]) => leaves(value, `${path}/${key}`)) : [[path, node]])

/** Every figure alike; those of plots, which carry six digits, to within their last. */
function expectAlike(one: unknown, other: unknown): void {
  const others = new Map(leaves(other))
  for (const [path, value] of leaves(one)) {
    const theirs = others.get(path)
    const near = typeof value === 'number' && typeof theirs === 'number' && Math.abs(value - theirs) <= (path.startsWith('/plot') ? 2e-5 : 1e-10) * Math.max(1, Math.abs(value))
    expect([path, near || value === theirs]).toEqual([path, true])
  }
}

describe('no treatment contrast', () => {
  it('leaves no figure that a shift of whole arms would change', () => {
    const plain = analysisUnder({})
    expect(leaves(plain).filter(([, value]) => typeof value === 'number').length).toBeGreaterThan(300)
    expectAlike(plain, analysisUnder({ HIGH: -37.25, LOW: 12.5, PBO: 1000 }))
  })

  it.each(['occasions', 'constant'] as const)('leaves no figure of location in an analysis of %s', (kind) => {
    const within = (shift: number) => {
      const { columns, subjects } = columnsShifted({ HIGH: shift, LOW: shift, PBO: shift })
      const earlier = columnsShifted({}).columns.value.map(x => Math.round(x * 8) / 4)
      const visits = ['Baseline', 'Week 8'].flatMap(visit => columns.subject.map(() => visit))
      const twice = <T>(list: readonly T[]): T[] => [...list, ...list]
      const double: ExtractColumns = {
        ...columns, rows: 2 * columns.rows, sourceRow: visits.map((_, index) => index + 2), subject: twice(columns.subject), parameter: twice(columns.parameter!),
        visit: visits, value: Float64Array.of(...earlier, ...columns.value), unit: twice(columns.unit!), flags: { FASFL: twice(columns.flags.FASFL!) },
      }
      const quantity = kind === 'occasions' ? 'differences' : 'values'
      const shape = { ...normality, quantity } as Requirement
      const symmetry: Requirement = { id: 'symmetry', kind: 'symmetry', quantity, limits: { size: { measure: 'skewness', limit: 0.01, reading: 'estimate' } }, minimum: 8, otherReading: { tooFewData: null, procedureUndefined: null } }
      const analysis = {
        ...plainAnalysis, comparison: kind === 'occasions' ? { kind, first: 'Baseline', second: 'Week 8' } : { kind, visit: 'Week 8' },
        prerequisites: [asSwitch(shape), asSwitch(symmetry)], notAssessableLeadsTo: null,
        fallbacks: [{ ...plainAnalysis.fallbacks[0]!, method: 'wilcoxon-signed-rank' as const, trigger: { kind: 'any' as const }, prerequisites: [shape, symmetry] }],
      }
      return judge({ plan: { ...plan, analyses: [analysis] }, columns: double, extract: { ...IDENTITY, purpose: 'interim' }, allocation: { state: 'true', hash: null, subjects }, queries: {} }).analyses[0]!
    }
    expect(within(0).plot).not.toBeNull()
    expect(within(0).steps[0]!.outcome).toBe('prerequisite-not-met')
    expectAlike(within(0), within(640.5))
  })

  it('tells arms apart by their spread, so that the figures above are not simply empty', () => {
    const { verdict, byArm, steps } = analysisUnder({})
    expect(verdict).toMatchObject({ word: 'no-registered-method' })
    expect(steps[0]).toMatchObject({ outcome: 'prerequisite-not-met' })
    const sd = Object.fromEntries(byArm!.map(arm => [arm.arm, arm.sd!]))
    expect(sd.HIGH! / sd.PBO!).toBeGreaterThan(2)
  })

  it('imports no comparison into the decision', () => {
    const root = fileURLToPath(new URL('../../../../shared/', import.meta.url))
    const files = readdirSync(join(root, 'decision'), { recursive: true, encoding: 'utf8' }).filter(name => name.endsWith('.ts'))
    const imports = files.flatMap(name => [...readFileSync(join(root, 'decision', name), 'utf8').matchAll(/from '[^']*statistics\/([^']+)'/g)].map(match => match[1]!))
    expect(imports.length).toBeGreaterThan(10)
    const rooms = new Set(imports.map(path => (path.includes('/') ? path.split('/')[0] : path)))
    expect([...rooms].sort()).toEqual(['descriptive', 'multiplicity', 'normality', 'spread', 'types', 'workspace'])
  })
})
