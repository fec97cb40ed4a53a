import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import type { Requirement } from '#shared/plan/prerequisiteSchema'
import type { Plan } from '#shared/plan/schema'
import type { Row, Trial } from './randomTrial'

export interface Person { id: string, arm: string | null, values: Map<string, Row> }

export const mean = (list: number[]) => list.reduce((sum, x) => sum + x, 0) / list.length
export const sd = (list: number[]) => Math.sqrt(list.reduce((sum, x) => sum + (x - mean(list)) ** 2, 0) / (list.length - 1))
export const alike = (list: number[]) => list.every(x => x === list[0])

export type Log = { readonly base: string, readonly shift: number } | null

/** Everything that the sentences of the rule talk about, over plain lists. */
export class Situation {
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
  derived({ values }: Person, log: Log): number {
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
  samples(log: Log): number[][] {
    const groups = this.compared.length > 0 ? this.compared.map(arm => this.inArm(arm)) : [this.usable]
    return groups.map(group => group.map(person => this.derived(person, log)))
  }
}
