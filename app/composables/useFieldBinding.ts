/**
 * Binds a form control either to the surrounding vee-validate form by its name, or to `v-model` alone. A control
 * that is given a model value never enters the form's document.
 */
export function useFieldBinding<T>(name: () => string, model: Ref<T | undefined>) {
  const id = useId()
  if (hasModel()) return { id, value: model, errorMessage: ref<string | undefined>(undefined), blur: () => {} }

  const { value, errorMessage, handleBlur } = useField<T>(name, undefined, { keepValueOnUnmount: true })
  return { id, value, errorMessage: useIssueText(errorMessage), blur: () => handleBlur() }
}

/** Whether the parent gave this component a model value. */
function hasModel(): boolean {
  const props = getCurrentInstance()?.vnode.props ?? {}
  return 'modelValue' in props || 'model-value' in props || 'onUpdate:modelValue' in props
}
