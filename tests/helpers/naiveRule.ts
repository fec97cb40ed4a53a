import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import type { Requirement } from '#shared/plan/prerequisiteSchema'
import type { Plan } from '#shared/plan/schema'
import { skewness } from '#shared/statistics/descriptive/skewness'
import { andersonDarling } from '#shared/statistics/normality/andersonDarling'
import { shapiroWilk } from '#shared/statistics/normality/shapiroWilk'
import { brownForsythe } from '#shared/statistics/spread/brownForsythe'
import { sdRatio } from '#shared/statistics/spread/sdRatio'
import type { Row, Trial } from './randomTrial'

/**
 * The decision rule read a second time, sentence by sentence, over plain lists: no compiled rule, no workspace,
 * no codes. It shares with the engine only the checked statistical procedures.
 */
export interface NaiveVerdict { word: string, step: string | null, reason: string | null, setAside: string | null }

type Found = { is: 'met' | 'not met' } | { is: 'not assessable', reason: string }
interface Person { id: string, arm: string | null, values: Map<string, Row> }

const mean = (list: number[]) => list.reduce((sum, x) => sum + x, 0) / list.length
const sd = (list: number[]) => Math.sqrt(list.reduce((sum, x) => sum + (x - mean(list)) ** 2, 0) / (list.length - 1))
const alike = (list: number[]) => list.every(x => x === list[0])

/** Everything that the sentences below talk about. */
class Situation {
  readonly people: Person[]
  readonly expected: Person[]
  readonly usable: Person[]
  readonly compared: string[]
  readonly selected: Row[]

  constructor(readonly trial: Trial, readonly analysis: PlannedAnalysis) {
    const { plan, rows } = trial
    this.compared = analysis.comparison.kind === 'arms' ? analysis.comparison.arms : []
    this.selected = rows.filter(row => row.inSet && (analysis.recordSelection === null || row.flagged) && this.visits().includes(row.visit))
    const everybody = new Set((this.atTheEnd() ? rows.filter(row => row.inSet) : this.selected).map(row => row.subject))
    this.people = [...everybody].sort().map(id => ({ id, arm: trial.allocation?.[id] ?? null, values: this.valuesOf(id, plan) }))
    this.expected = this.people
    this.usable = this.people.filter(({ values }) => this.visits().every(visit => values.has(visit)))
  }

  atTheEnd() { return this.trial.purpose === 'database-lock' }
  visits(): string[] {
    const { comparison } = this.analysis
    return comparison.kind === 'occasions' ? [comparison.first, comparison.second] : [comparison.visit]
  }

  derivation() { return this.trial.plan.endpoints[0]!.derivation }
  needsArms() { return [...this.analysis.prerequisites, ...this.analysis.fallbacks.flatMap(step => step.prerequisites)].some(each => this.byArms(each)) }

  byArms(requirement: Requirement): boolean {
    if (this.analysis.comparison.kind !== 'arms') return false
    const all = this.compared.length === this.trial.plan.arms.length
    if (requirement.kind === 'count') return requirement.scope === 'per-arm'
    if (requirement.kind === 'missing-values') return requirement.scope === 'compared-arms' && !all
    return requirement.kind === 'positive-values' ? !all : true
  }

  everybodyAllocated() { return this.expected.every(({ arm }) => arm !== null) }

  private valuesOf(id: string, plan: Plan): Map<string, Row> {
    const derivation = plan.endpoints[0]!.derivation
    const good = this.selected.filter(row => row.subject === id && !Number.isNaN(row.value)
      && (derivation === 'none' || !Number.isNaN(row.baseline)) && (derivation !== 'percent-change' || row.baseline !== 0))
    return new Map(good.reverse().map(row => [row.visit, row]))
  }

  /** The derived value of one person after a transformation; NaN where it does not exist. */
  derived({ values }: Person, log: { base: string, shift: number } | null): number {
    const f = (x: number) => (log === null ? x : x + log.shift > 0 ? Math.log(x + log.shift) / (log.base === 'e' ? 1 : Math.log(Number(log.base))) : Number.NaN)
    const [last, first] = this.visits().toReversed().map((visit) => {
      const { value, baseline } = values.get(visit)!
      if (this.derivation() === 'none') return f(value)
      return this.derivation() === 'change' ? f(value) - f(baseline) : 100 * (value - baseline) / baseline
    })
    return first === undefined ? last! : last! - first
  }

  inArm(arm: string) { return this.usable.filter(person => person.arm === arm) }

  /** Lists of derived values: one an arm, or the only one. */
  samples(log: { base: string, shift: number } | null): number[][] {
    const groups = this.compared.length > 0 ? this.compared.map(arm => this.inArm(arm)) : [this.usable]
    return groups.map(group => group.map(person => this.derived(person, log)))
  }
}

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

const all = (found: Found[]): Found =>
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

function normality(situation: Situation, requirement: Extract<Requirement, { kind: 'normality' | 'symmetry' }>, log: { base: string, shift: number } | null): Found {
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

function spread(situation: Situation, requirement: Extract<Requirement, { kind: 'equal-spread' }>, log: { base: string, shift: number } | null): Found {
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

function judgeOne(situation: Situation, requirement: Requirement, log: { base: string, shift: number } | null): Found {
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

function queryOpen({ trial: { plan }, selected }: Situation): boolean {
  const keys = selected.map(({ subject, visit }) => `${subject} ${visit}`)
  if (new Set(keys).size < keys.length) return true
  const [endpoint] = plan.endpoints
  const held = (plan.screens.find(({ kind }) => kind === 'impossible-value')?.action ?? 'hold') === 'hold'
  const low = (x: number) => endpoint!.possible.min !== null && x < endpoint!.possible.min
  return held && selected.some(({ value, baseline }) => low(value) || (endpoint!.derivation !== 'none' && low(baseline)))
}

const not = (reason: string, step: string | null = null): NaiveVerdict => ({ word: 'not-assessable', step, reason, setAside: null })

/** Walks from a step on; `goingOn` is the walk at the decision point. */
function walkFrom(situation: Situation, from: number, failed: string[], goingOn: boolean): NaiveVerdict {
  const { fallbacks } = situation.analysis
  for (const [index, step] of fallbacks.entries()) {
    if (index < from) continue
    const { trigger } = step
    const named = trigger.kind === 'any' ? [] : trigger.of
    const fires = trigger.kind === 'any' ? failed.length > 0 : named.every(id => failed.includes(id)) && (trigger.kind === 'at-least' || failed.length === named.length)
    if (!fires && !(goingOn && index === from)) continue
    const own = step.prerequisites.map(requirement => judgeOne(situation, requirement, step.transformation))
    const verdict = all(own)
    if (verdict.is === 'met') return { word: 'fallback-applies', step: step.id, reason: null, setAside: null }
    if (verdict.is === 'not assessable' && !goingOn) return not(verdict.reason, step.id)
  }
  return { word: 'no-registered-method', step: null, reason: null, setAside: null }
}

/** Whether a walk from the registered step would hang on arms; asked only while some arms are not known. */
function hangsOnArms(situation: Situation, from: number): boolean {
  const { fallbacks, prerequisites } = situation.analysis
  const step = fallbacks[from]!
  const armFree = step.prerequisites.filter(each => !situation.byArms(each))
  const fails = armFree.some(each => judgeOne(situation, each, step.transformation).is !== 'met')
  if (!fails) return armFree.length < step.prerequisites.length
  if (from + 1 === fallbacks.length) return false
  return prerequisites.some(each => each.onFailure === 'switch' && situation.byArms(each)) || hangsOnArmsLater(situation, from)
}

function hangsOnArmsLater(situation: Situation, from: number): boolean {
  const failed = failedSwitches(situation)
  const { fallbacks } = situation.analysis
  for (const [index, step] of fallbacks.entries()) {
    if (index <= from) continue
    const fires = step.trigger.kind === 'any' ? failed.length > 0 : step.trigger.of.every(id => failed.includes(id)) && (step.trigger.kind === 'at-least' || failed.length === step.trigger.of.length)
    if (!fires) continue
    const armFree = step.prerequisites.filter(each => !situation.byArms(each))
    if (armFree.some(each => judgeOne(situation, each, step.transformation).is !== 'met')) continue
    return armFree.length < step.prerequisites.length
  }
  return false
}

const failedSwitches = (situation: Situation) => situation.analysis.prerequisites
  .filter(each => each.onFailure === 'switch' && judgeOne(situation, each, null).is === 'not met').map(({ id }) => id)

function goOn(situation: Situation, found: NaiveVerdict, failed: string[]): NaiveVerdict {
  if (!situation.atTheEnd()) return found
  const leadsTo = situation.analysis.fallbacks.findIndex(({ id }) => id === situation.analysis.notAssessableLeadsTo)
  if (leadsTo < 0) return { word: 'no-registered-method', step: null, reason: null, setAside: found.reason }
  const known = situation.trial.allocation !== null && situation.everybodyAllocated()
  if (!known && situation.needsArms() && hangsOnArms(situation, leadsTo)) return not('allocation-withheld')
  return { ...walkFrom(situation, leadsTo, failed, true), setAside: found.reason }
}

function holdReason(situation: Situation, armFree: boolean): string | null {
  for (const each of situation.analysis.prerequisites) {
    if (each.onFailure !== 'hold' || situation.byArms(each) === armFree) continue
    const found = judgeOne(situation, each, null)
    if (found.is === 'not assessable') return found.reason
    if (found.is === 'not met') return each.kind === 'count' ? 'too-few-subjects' : 'too-many-missing'
  }
  return null
}

/** The verdict of one planned analysis by PRODUCT's decision rule. */
export function naiveVerdict(trial: Trial, analysis: PlannedAnalysis): NaiveVerdict {
  const situation = new Situation(trial, analysis)
  if (queryOpen(situation)) return not('data-query-open')
  const needsArms = situation.needsArms()
  if (needsArms && trial.allocation === null) return not('allocation-withheld')
  const failed = failedSwitches(situation)
  const undetermined = trial.rows.length === 0
  const cause = undetermined ? 'analysis-set-undetermined' : holdReason(situation, true)
  if (cause !== null) return goOn(situation, not(cause), failed)
  if (needsArms && !situation.everybodyAllocated()) return not('allocation-withheld')
  const held = holdReason(situation, false)
  if (held !== null) return goOn(situation, not(held), failed)
  for (const each of analysis.prerequisites.filter(({ onFailure }) => onFailure === 'switch')) {
    const found = judgeOne(situation, each, null)
    if (found.is === 'not assessable') return goOn(situation, not(found.reason), failed)
  }
  if (failed.length === 0) return { word: 'planned-method-stands', step: null, reason: null, setAside: null }
  const verdict = walkFrom(situation, 0, failed, false)
  return verdict.word === 'not-assessable' ? goOn(situation, verdict, failed) : verdict
}
