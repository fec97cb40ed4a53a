/** Schemas answer with codes; this words them, and leaves what is a sentence already as it is. */
export function useIssueText(message: Ref<string | undefined>) {
  const { t, te } = useI18n()

  return computed(() => {
    const code = message.value
    if (!code) return undefined
    const key = ['plan.issues', 'problems.detail'].map(lead => `${lead}.${code}`).find(candidate => te(candidate))
    return key ? t(key) : code
  })
}
