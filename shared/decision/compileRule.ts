import type { Fallback, PlannedAnalysis, Transformation } from '../plan/analysisSchema'
import { analysisDependsOnArms, dependsOnArms } from '../plan/armDependence'
import type { Requirement } from '../plan/prerequisiteSchema'
import type { Plan } from '../plan/schema'
import { createOutcome, createWorkspace } from '../statistics/workspace'
import { spreadCheck, spreadMeasures } from './checks/equalSpread'
import { normalityLimits, samplesJudged, shapeCheck, symmetryLimits } from './checks/normality'
import { shapeMeasures } from './checks/shape'
import { countCheck, missingCheck, positiveCheck } from './checks/subjects'
import { UNJUDGED } from './codes'
import { type Check, type CompiledRule, type CompiledStep, type Deriving, TRACE_FIELDS, type TraceLayout, traceRows, type View, type Workspace } from './rule'

const UNTRANSFORMED: View = { base: null, shift: 0 }

/** Each transformation once; the untransformed values come first. */
function viewsOf({ fallbacks }: PlannedAnalysis): View[] {
  const views = [UNTRANSFORMED]
  for (const { transformation } of fallbacks) {
    if (transformation !== null && viewOf(views, transformation) < 0) views.push({ base: transformation.base, shift: transformation.shift })
  }
  return views
}

const viewOf = (views: readonly View[], transformation: Transformation | null): number =>
  (transformation === null ? 0 : views.findIndex(({ base, shift }) => base === transformation.base && shift === transformation.shift))

/** Share of each compared arm among all subjects, by allocation ratio. */
function sharesOf({ arms }: Plan, { comparison }: PlannedAnalysis): number[] {
  if (comparison.kind !== 'arms') return [1]
  const whole = arms.reduce((sum, { ratio }) => sum + ratio, 0)
  return comparison.arms.map(id => (arms.find(arm => arm.id === id)?.ratio ?? 0) / whole)
}

function layoutOf(requirement: Requirement, groups: number): Omit<TraceLayout, 'start'> {
  switch (requirement.kind) {
    case 'normality': return { samples: samplesJudged(requirement, groups), sampleMeasures: shapeMeasures(normalityLimits(requirement)), wholeMeasures: [] }
    case 'symmetry': return { samples: 1, sampleMeasures: shapeMeasures(symmetryLimits(requirement)), wholeMeasures: [] }
    case 'equal-spread': return { samples: groups, sampleMeasures: [], wholeMeasures: spreadMeasures(requirement) }
    case 'positive-values': return { samples: 1, sampleMeasures: ['not-positive'], wholeMeasures: [] }
    case 'count': return requirement.scope === 'per-arm'
      ? { samples: groups, sampleMeasures: ['count'], wholeMeasures: [] }
      : { samples: 0, sampleMeasures: [], wholeMeasures: ['count'] }
    case 'missing-values': return { samples: 0, sampleMeasures: [], wholeMeasures: ['share-missing'] }
  }
}

/** Compiles prerequisites one after another, each with its own rows of the trace. */
class Compiler {
  readonly checks: Check[] = []
  #rows = 0

  constructor(readonly plan: Plan, readonly analysis: PlannedAnalysis, readonly groups: number, readonly deriving: Deriving) {}

  get traceLength(): number {
    return this.#rows * TRACE_FIELDS
  }

  /** Index of the new check. */
  add(requirement: Requirement, transformation: Transformation | null): number {
    const shape = layoutOf(requirement, this.groups)
    const layout = { ...shape, start: this.#rows }
    this.#rows += traceRows(shape)
    const start = layout.start * TRACE_FIELDS
    const end = this.#rows * TRACE_FIELDS
    const judge = this.#judge(requirement, transformation, layout)
    this.checks.push({
      requirement,
      dependsOnArms: dependsOnArms(this.plan, this.analysis, requirement),
      layout,
      judge: (sample, workspace) => {
        workspace.trace.fill(Number.NaN, start, end)
        return judge(sample, workspace)
      },
    })
    return this.checks.length - 1
  }

  #judge(requirement: Requirement, transformation: Transformation | null, layout: TraceLayout): Check['judge'] {
    const view = viewOf(this.deriving.views, transformation)
    switch (requirement.kind) {
      case 'normality': return shapeCheck(requirement, normalityLimits(requirement), view, this.deriving, layout)
      case 'symmetry': return shapeCheck(requirement, symmetryLimits(requirement), view, this.deriving, layout)
      case 'equal-spread': return spreadCheck(requirement, view, this.deriving, layout)
      case 'positive-values': return positiveCheck(transformation?.shift ?? 0, layout)
      case 'count': return countCheck(requirement, sharesOf(this.plan, this.analysis), layout)
      case 'missing-values': {
        const compared = requirement.scope === 'compared-arms' && this.analysis.comparison.kind === 'arms' && this.analysis.comparison.arms.length < this.plan.arms.length
        return missingCheck(requirement, compared ? 'compared' : 'all', layout)
      }
    }
  }
}

function compileStep({ trigger, prerequisites, transformation }: Fallback, switches: readonly string[], compiler: Compiler): CompiledStep {
  const mask = trigger.kind === 'any' ? 0 : trigger.of.reduce((bits, id) => bits | (1 << switches.indexOf(id)), 0)
  return { trigger: trigger.kind, mask, checks: prerequisites.map(requirement => compiler.add(requirement, transformation)) }
}

/**
 * Turns one planned analysis of a consistent plan into numeric steps. What comes out holds no data and may be
 * run any number of times, each with a workspace of `makeWorkspace`.
 */
export function compileRule(plan: Plan, analysis: PlannedAnalysis): CompiledRule {
  const groups = analysis.comparison.kind === 'arms' ? analysis.comparison.arms.length : 1
  const deriving: Deriving = {
    derivation: plan.endpoints.find(({ id }) => id === analysis.endpoint)?.derivation ?? 'none',
    views: viewsOf(analysis),
  }
  const compiler = new Compiler(plan, analysis, groups, deriving)
  const planned = analysis.prerequisites.map(prerequisite => compiler.add(prerequisite, null))
  const failing = (consequence: string) => planned.filter(index => analysis.prerequisites[index]?.onFailure === consequence)
  const switches = failing('switch')
  const switchIds = switches.map(index => analysis.prerequisites[index]?.id ?? '')
  const steps = analysis.fallbacks.map(step => compileStep(step, switchIds, compiler))
  const byArms = (index: number) => compiler.checks[index]?.dependsOnArms === true
  const holds = failing('hold')
  return {
    ...deriving, groups, checks: compiler.checks, planned, switches, steps,
    holds: { armFree: holds.filter(index => !byArms(index)), byArms: holds.filter(byArms) },
    leadsTo: analysis.fallbacks.findIndex(({ id }) => id === analysis.notAssessableLeadsTo),
    dependsOnArms: analysisDependsOnArms(plan, analysis),
    switchesDependOnArms: switches.some(byArms),
    traceLength: compiler.traceLength,
  }
}

/** @param capacity the largest number of subjects that a run will be given. */
export function makeWorkspace(rule: CompiledRule, capacity: number): Workspace {
  return {
    capacity,
    views: rule.views.map(() => ({ values: new Float64Array(capacity), ready: false, defined: false })),
    statistics: createWorkspace(capacity),
    figures: createOutcome(),
    quantity: new Float64Array(capacity),
    pooled: new Uint32Array(2),
    pValues: new Float64Array(rule.groups),
    adjusted: new Float64Array(rule.groups),
    outcomes: new Int32Array(rule.checks.length).fill(UNJUDGED),
    stepOutcomes: new Uint8Array(rule.steps.length),
    stepReasons: new Int32Array(rule.steps.length),
    trace: new Float64Array(rule.traceLength),
    touchedArms: false,
  }
}
