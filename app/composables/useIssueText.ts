/** A field's message: schemas of ours answer with codes, which are worded here; sentences stay as they are. */
export function useIssueText(message: Ref<string | undefined>) {
  const { t, te } = useI18n()

  return computed(() => {
    const code = message.value
    if (!code || !/^[a-z0-9-]+$/.test(code)) return code
    const key = ['problems.detail', 'plan.issues'].map(lead => `${lead}.${code}`).find(candidate => te(candidate))
    return key ? t(key) : t('base.unworded', { code })
  })
}
