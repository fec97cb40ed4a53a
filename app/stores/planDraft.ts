/** Drafts as they are being edited and not yet saved, by plan version; the saved ones are the server's. */
export const usePlanDraftStore = defineStore('planDraft', () => {
  const drafts = ref<Record<string, { document: unknown, revision: number }>>({})

  const unsaved = (planId: string) => drafts.value[planId] ?? null

  function keep(planId: string, document: unknown, revision: number) {
    drafts.value[planId] = { document, revision }
  }

  function drop(planId: string) {
    const { [planId]: _dropped, ...others } = drafts.value
    drafts.value = others
  }

  return { drafts, unsaved, keep, drop }
})
