import type { MemoAnalysis, MemoStep } from '../../shared/memo/content'
import type { Fallback, PlannedAnalysis } from '../../shared/plan/analysisSchema'
import { describeComparison, describePrerequisite, describeTransformation, describeTrigger } from '../../shared/plan/describe'
import { wordPhrase, type Phrase } from '../../shared/plan/phrase'
import type { Plan } from '../../shared/plan/schema'
import { stepHead, stepName } from './terms'
import { registered, type Say } from './words'

function endpointWords(plan: Plan, { endpoint }: PlannedAnalysis, say: Say): string {
  const found = plan.endpoints.find(({ id }) => id === endpoint)
  if (!found) return endpoint
  return say('memo.words.endpoint', { label: found.label, unit: found.unit, derivation: say(`plan.derivations.${found.derivation}`) })
}

function frameWords(plan: Plan, analysis: PlannedAnalysis, say: Say): string[] {
  const set = plan.analysisSets.find(({ id }) => id === analysis.analysisSet)?.label ?? analysis.analysisSet
  const { recordSelection } = analysis
  return [
    endpointWords(plan, analysis, say),
    say('memo.words.comparison', { comparison: wordPhrase(describeComparison(plan, analysis), say) }),
    recordSelection === null ? say('memo.words.set', { set }) : say('memo.words.setSelected', { set, column: recordSelection.column, value: recordSelection.value }),
    ...(analysis.estimand === null ? [] : [say('memo.words.estimand', { estimand: analysis.estimand })]),
    say('memo.words.method', {
      importance: say(`plan.importances.${analysis.importance}`),
      method: say(`plan.methods.${analysis.method}`),
      measure: say(`plan.measures.${analysis.summaryMeasure}`),
      direction: say(`plan.directions.${analysis.direction}`),
      alpha: registered(analysis.alpha),
      nullValue: registered(analysis.nullValue),
    }),
  ]
}

function stepWords(step: Fallback, analysis: PlannedAnalysis, say: Say): MemoStep {
  const word = (phrase: Phrase) => wordPhrase(phrase, say)
  return {
    head: say('memo.step.when', { step: stepHead(analysis, step.id, say), trigger: word(describeTrigger(step.trigger)) }),
    lines: [
      ...step.transformation === null ? [] : [word(describeTransformation(step.transformation))],
      ...step.prerequisites.map(prerequisite => word(describePrerequisite(prerequisite))),
      say('memo.words.measure', { measure: say(`plan.measures.${step.summaryMeasure}`) }),
    ],
  }
}

const notAssessableWords = (analysis: PlannedAnalysis, say: Say) => analysis.notAssessableLeadsTo === null
  ? say('memo.words.notAssessableNothing')
  : say('memo.words.notAssessableStep', { step: stepName(analysis, analysis.notAssessableLeadsTo, say) })

/** The planned analysis in sentences, in the order in which the rule reads it. */
export const registeredWords = (plan: Plan, analysis: PlannedAnalysis, say: Say): MemoAnalysis['words'] => ({
  frame: frameWords(plan, analysis, say),
  prerequisites: analysis.prerequisites.map(prerequisite => say('memo.words.prerequisite', {
    prerequisite: wordPhrase(describePrerequisite(prerequisite), say), consequence: say(`plan.consequences.${prerequisite.onFailure}`),
  })),
  order: analysis.fallbacks.map(step => stepWords(step, analysis, say)),
  notAssessable: notAssessableWords(analysis, say),
})
