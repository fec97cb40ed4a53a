import type { PlannedAnalysis, Trigger } from '#shared/plan/analysisSchema'
import { describePrerequisite, describeStep, describeTrigger } from '#shared/plan/describe'
import { wordPhrase, type Phrase } from '#shared/plan/phrase'
import type { Prerequisite, Requirement } from '#shared/plan/prerequisiteSchema'

/** What a planned analysis registers, in words by id: prerequisites, steps, triggers, the steps' own needs. */
export function useDescribedAnalysis(analysis: Ref<PlannedAnalysis | null>) {
  const { t } = useI18n()
  const word = (phrase: Phrase) => wordPhrase(phrase, (key, params) => t(key, params))
  const byId = (items: readonly (Prerequisite | Requirement)[]) => Object.fromEntries(items.map(item => [item.id, word(describePrerequisite(item))]))

  /** A trigger names prerequisites by their short names; people read the kinds. */
  function worded(trigger: Trigger): string {
    const { key, params } = describeTrigger(trigger)
    if (trigger.kind === 'any') return word({ key, params })
    const kindOf = (id: string) => analysis.value?.prerequisites.find(item => item.id === id)?.kind
    const of = trigger.of.map((id) => {
      const kind = kindOf(id)
      return kind ? t(`plan.kinds.${kind}`) : id
    })
    return word({ key, params: { ...params, of: of.join(', ') } })
  }

  return computed(() => {
    const fallbacks = analysis.value?.fallbacks ?? []
    return {
      prerequisites: byId(analysis.value?.prerequisites ?? []),
      labels: Object.fromEntries(fallbacks.map(step => [step.id, analysis.value ? word(describeStep(analysis.value, step)) : step.id])),
      triggers: Object.fromEntries(fallbacks.map(({ id, trigger }) => [id, worded(trigger)])),
      requirements: Object.fromEntries(fallbacks.map(({ id, prerequisites }) => [id, byId(prerequisites)])),
    }
  })
}
