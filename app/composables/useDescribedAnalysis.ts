import type { PlannedAnalysis } from '#shared/plan/analysisSchema'
import { describeLimits, describeTrigger } from '#shared/plan/describe'
import { wordPhrase, type Phrase } from '#shared/plan/phrase'
import type { Prerequisite, Requirement } from '#shared/plan/prerequisiteSchema'

/** What a planned analysis registers, in words by id: prerequisites, steps, triggers, the steps' own needs. */
export function useDescribedAnalysis(analysis: Ref<PlannedAnalysis | null>) {
  const { t } = useI18n()
  const word = (phrase: Phrase) => wordPhrase(phrase, (key, params) => t(key, params))
  const limits = (item: Prerequisite | Requirement) => describeLimits(item).map(word).join('; ')
  const byId = (items: readonly (Prerequisite | Requirement)[]) => Object.fromEntries(items.map(item => [item.id, limits(item)]))

  return computed(() => {
    const fallbacks = analysis.value?.fallbacks ?? []
    return {
      prerequisites: byId(analysis.value?.prerequisites ?? []),
      labels: Object.fromEntries(fallbacks.map(({ id, method }) => [id, t(`plan.methods.${method}`)])),
      triggers: Object.fromEntries(fallbacks.map(({ id, trigger }) => [id, word(describeTrigger(trigger))])),
      requirements: Object.fromEntries(fallbacks.map(({ id, prerequisites }) => [id, byId(prerequisites)])),
    }
  })
}
