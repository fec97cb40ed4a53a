import type { Requirement } from '#shared/plan/prerequisiteSchema'
import { skewness } from '#shared/statistics/descriptive/skewness'
import { andersonDarling } from '#shared/statistics/normality/andersonDarling'
import { shapiroWilk } from '#shared/statistics/normality/shapiroWilk'
import { brownForsythe } from '#shared/statistics/spread/brownForsythe'
import { sdRatio } from '#shared/statistics/spread/sdRatio'
import { alike, type Log, mean, type Person, sd, type Situation } from './naiveSituation'

/** Prerequisites judged by their words. Shared with the engine are only the checked statistical procedures. */
export type Found = { is: 'met' | 'not met' } | { is: 'not assessable', reason: string }

const unless = (reason: string): Found => ({ is: 'not assessable', reason })
const fails = (broken: boolean): Found => ({ is: broken ? 'not met' : 'met' })

function attempt(procedure: () => boolean): boolean | null {
  try {
    return procedure()
  }
  catch {
    return null
  }
}

function joined(size: boolean | null | undefined, level: boolean | null | undefined, broken: string): boolean | null {
  const parts = [size, level].filter(part => part !== undefined)
  if (broken === 'both' ? parts.includes(false) : parts.includes(true)) return broken !== 'both'
  return parts.includes(null) ? null : broken === 'both'
}

/** Which figure of an estimate with limits is read. */
function reading(name: string, n: number) {
  return name === 'by-n' ? (n < 50 ? 'lower-limit' : 'estimate') : name
}

function skewed(list: number[], size: { limit: number, reading: string }): boolean {
  const { value, lower, upper } = skewness(list)
  const how = reading(size.reading, list.length)
  if (how === 'estimate') return Math.abs(value) > size.limit
  return how === 'lower-limit' ? lower > size.limit || upper < -size.limit : !(lower >= -size.limit && upper <= size.limit)
}

interface Shape {
  limits: { size: { limit: number, reading: string } | null, significance?: { procedure: string, level: number } | null, broken?: string }
  minimum: number
  multiplicity?: string
  otherReading: { tooFewData: 'met' | 'not-met' | null, procedureUndefined: 'met' | 'not-met' | null }
}

function otherwise({ otherReading }: Shape, reason: 'too-few-data' | 'procedure-undefined'): Found {
  const read = reason === 'too-few-data' ? otherReading.tooFewData : otherReading.procedureUndefined
  return read === null ? unless(reason) : fails(read === 'not-met')
}

export const all = (found: Found[]): Found =>
  found.find(each => each.is === 'not met') ?? found.find(each => each.is === 'not assessable') ?? { is: 'met' }

/** Adjusted by the definitions: Bonferroni times m; Holm's running maximum of (m − rank) p. */
function adjusted(p: (number | null)[], method: string): (number | null)[] {
  const m = p.length
  const filled = p.map(each => each ?? 1)
  if (method === 'bonferroni') return p.map(each => (each === null ? null : Math.min(1, m * each)))
  if (method !== 'holm') return p
  return p.map((each) => {
    if (each === null) return null
    const before = [...filled].sort((a, b) => a - b).filter(other => other <= each)
    return Math.min(1, Math.max(...before.map((other, rank) => (m - rank) * other)))
  })
}

function shapeOf(samples: number[][], shape: Shape): Found {
  const test = shape.limits.significance ?? null
  const p = samples.map((list) => {
    if (test === null || list.length < shape.minimum) return null
    try {
      return (test.procedure === 'shapiro-wilk' ? shapiroWilk(list) : andersonDarling(list)).pValue
    }
    catch {
      return null
    }
  })
  const told = adjusted(p, shape.multiplicity ?? 'none')
  return all(samples.map((list, index) => {
    if (list.length < shape.minimum) return otherwise(shape, 'too-few-data')
    const { size } = shape.limits
    const bySize = size === null ? undefined : attempt(() => skewed(list, size))
    const pValue = told[index] ?? null
    const byLevel = test === null ? undefined : pValue === null ? null : pValue <= test.level
    const broken = joined(bySize, byLevel, shape.limits.broken ?? 'either')
    return broken === null ? otherwise(shape, 'procedure-undefined') : fails(broken)
  }))
}

function normality(situation: Situation, requirement: Extract<Requirement, { kind: 'normality' | 'symmetry' }>, log: Log): Found {
  const samples = situation.samples(log)
  if (samples.flat().some(x => !Number.isFinite(x))) return otherwise(requirement, 'procedure-undefined')
  if (requirement.quantity === 'residuals' || requirement.quantity === 'residuals-by-own-sd') {
    const own = requirement.quantity === 'residuals-by-own-sd'
    if (samples.some(list => list.length === 0)) return otherwise(requirement, 'too-few-data')
    const trouble = own ? samples.find(list => list.length < 2 || alike(list)) : undefined
    if (trouble !== undefined) return otherwise(requirement, trouble.length < 2 ? 'too-few-data' : 'procedure-undefined')
    const residuals = samples.flatMap(list => list.map(x => (alike(list) ? 0 : (x - mean(list)) / (own ? sd(list) : 1))))
    return shapeOf([residuals], requirement)
  }
  return shapeOf(samples, requirement)
}

function spread(situation: Situation, requirement: Extract<Requirement, { kind: 'equal-spread' }>, log: Log): Found {
  const samples = situation.samples(log)
  if (samples.some(list => list.length < requirement.minimum)) return otherwise(requirement, 'too-few-data')
  if (samples.flat().some(x => !Number.isFinite(x))) return otherwise(requirement, 'procedure-undefined')
  const { size, significance, broken } = requirement.limits
  const bySize = size === null
    ? undefined
    : attempt(() => {
        const { value, lower, upper } = sdRatio(samples)
        const how = reading(size.reading, samples.flat().length)
        return (how === 'estimate' ? value : how === 'lower-limit' ? lower! : upper!) > size.limit
      })
  const byLevel = significance === null ? undefined : attempt(() => brownForsythe(samples).pValue <= significance.level)
  const verdict = joined(bySize, byLevel, broken)
  return verdict === null ? otherwise(requirement, 'procedure-undefined') : fails(verdict)
}

/** Subjects of the compared arms where picking them needs arms, else of the whole set. */
function concerned(situation: Situation, requirement: Requirement, people: Person[]): Person[] {
  return situation.byArms(requirement) ? people.filter(({ arm }) => situation.compared.includes(arm ?? '')) : people
}

function positive(situation: Situation, requirement: Requirement, shift: number): Found {
  const people = concerned(situation, requirement, situation.usable)
  if (people.length === 0) return unless('too-few-data')
  const raw = people.flatMap(({ values }) => situation.visits().flatMap((visit) => {
    const { value, baseline } = values.get(visit)!
    return situation.derivation() === 'none' ? [value] : [value, baseline]
  }))
  return fails(raw.some(x => !(x + shift > 0)))
}

function count(situation: Situation, requirement: Extract<Requirement, { kind: 'count' }>): Found {
  const { plan } = situation.trial
  const expected = situation.atTheEnd() ? plan.decisionPoint.expectedSubjects : plan.looks[0]!.expectedSubjects
  const whole = plan.arms.reduce((sum, { ratio }) => sum + ratio, 0)
  const enough = (n: number, share: number) => (requirement.least.kind === 'number' ? n >= requirement.least.n : n + 1e-9 >= requirement.least.share * expected * share)
  if (requirement.scope === 'in-all') return fails(!enough(situation.usable.length, 1))
  return fails(situation.compared.some(arm => !enough(situation.inArm(arm).length, plan.arms.find(({ id }) => id === arm)!.ratio / whole)))
}

export function judgeOne(situation: Situation, requirement: Requirement, log: Log): Found {
  if (situation.byArms(requirement) && !(situation.trial.allocation !== null && situation.everybodyAllocated())) return unless('allocation-withheld')
  switch (requirement.kind) {
    case 'normality': case 'symmetry': return normality(situation, requirement, log)
    case 'equal-spread': return spread(situation, requirement, log)
    case 'positive-values': return positive(situation, requirement, log?.shift ?? 0)
    case 'count': return count(situation, requirement)
    case 'missing-values': {
      const expected = concerned(situation, requirement, situation.expected).length
      if (expected === 0) return unless('too-few-subjects')
      return fails((expected - concerned(situation, requirement, situation.usable).length) / expected > requirement.most)
    }
  }
}
