import { toTypedSchema } from '@vee-validate/zod'
import { mountSuspended } from '@nuxt/test-utils/runtime'
import { flushPromises } from '@vue/test-utils'
import { describe, expect, it } from 'vitest'
import { useForm, type FormContext } from 'vee-validate'
import { defineComponent, h, type Component } from 'vue'
import { z } from 'zod'
import BaseCheckbox from '~/components/base/Checkbox.vue'
import BaseDateInput from '~/components/base/DateInput.vue'
import BaseInput from '~/components/base/Input.vue'
import BaseNumberInput from '~/components/base/NumberInput.vue'
import BaseProblem from '~/components/base/Problem.vue'
import BaseSelect from '~/components/base/Select.vue'
import BaseTextarea from '~/components/base/Textarea.vue'
import { toApiProblem } from '~/utils/apiProblem'

/** A form around the given children, with a hold on it. */
async function formWith(schema: z.ZodTypeAny, children: () => unknown, initialValues: Record<string, unknown> = {}) {
  let form: FormContext | null = null
  const wrapper = await mountSuspended(defineComponent({
    setup() {
      form = useForm({ validationSchema: toTypedSchema(schema), initialValues })
      return () => h('form', children() as never)
    },
  }))
  if (!form) throw new Error('the form did not mount')
  return { wrapper, form: form as FormContext }
}

/** vee-validate answers after a moment of its own. */
async function settled() {
  await flushPromises()
  await new Promise(resolve => setTimeout(resolve, 50))
  await flushPromises()
}

const options = [{ value: 'a', label: 'A' }, { value: 'b', label: 'B' }]

describe('fields', () => {
  it.each<[string, Component, object, string]>([
    ['BaseInput', BaseInput, {}, 'input'],
    ['BaseTextarea', BaseTextarea, {}, 'textarea'],
    ['BaseSelect', BaseSelect, { options }, 'select'],
    ['BaseNumberInput', BaseNumberInput, {}, 'input'],
    ['BaseDateInput', BaseDateInput, {}, 'input'],
  ])('%s has its label, hint and error tied to the control', async (_name, component, more, control) => {
    const { wrapper, form } = await formWith(z.object({ field: z.unknown() }), () => [h(component, { name: 'field', label: 'Field', hint: 'A hint.', ...more })])
    const element = wrapper.find(control)
    expect(wrapper.find('label').attributes('for')).toBe(element.attributes('id'))
    const described = () => element.attributes('aria-describedby')!.split(' ').map(id => wrapper.find(`[id="${id}"]`).text())
    expect(described()).toEqual(['A hint.'])
    expect(element.attributes('aria-invalid')).toBeUndefined()

    form.setErrors({ field: 'required' })
    await settled()
    expect(described()).toEqual(['A hint.', 'Is needed.'])
    expect(element.attributes('aria-invalid')).toBe('true')
  })

  it('words what the schema finds, in codes of ours and in its own', async () => {
    const schema = z.object({ name: z.string().min(3, 'too-short'), kind: z.enum(['a', 'b']) })
    const { wrapper, form } = await formWith(schema, () => [
      h(BaseInput, { name: 'name', label: 'Name' }), h(BaseSelect, { name: 'kind', label: 'Kind', options: [...options, { value: 'c', label: 'C' }] }),
    ], { name: 'x', kind: 'c' })
    await form.validate()
    await settled()
    expect(wrapper.text()).toContain('Is too short.')
    expect(wrapper.text()).toContain('Must be one of: a, b.')
  })

  it('writes into the form by name, and stays out of it with a model of its own', async () => {
    let own = ''
    const { wrapper, form } = await formWith(z.object({ name: z.string() }), () => [
      h(BaseInput, { name: 'name', label: 'Name' }),
      h(BaseInput, { 'name': 'other', 'label': 'Other', 'modelValue': own, 'onUpdate:modelValue': (value: string | null | undefined) => { own = value ?? '' } }),
    ], { name: '' })
    await wrapper.find('input[name=name]').setValue('Ines')
    await wrapper.find('input[name=other]').setValue('apart')
    expect(form.values).toEqual({ name: 'Ines' })
    expect(own).toBe('apart')
  })

  it('takes an empty control for null where the field may be null', async () => {
    const { wrapper, form } = await formWith(z.object({ note: z.string().nullable() }), () => [h(BaseInput, { name: 'note', label: 'Note', nullable: true })], { note: 'x' })
    await wrapper.find('input').setValue('')
    expect(form.values).toEqual({ note: null })
  })

  it.each([['0.05', 0.05], ['-1e-3', -0.001], ['', null], ['0,05', null], ['five', null]])('reads the number %s', async (text, number) => {
    const { wrapper, form } = await formWith(z.object({ level: z.number().nullable() }), () => [h(BaseNumberInput, { name: 'level', label: 'Level' })], { level: 1 })
    await wrapper.find('input').setValue(text)
    await wrapper.find('input').trigger('change')
    await settled()
    expect(form.values).toEqual({ level: number })
    expect(wrapper.text().includes('Is not a number')).toBe(number === null && text !== '')
    expect(wrapper.find('input').element.value).toBe(number === null ? text : String(number))
  })

  it('ticks a box by its label', async () => {
    const { wrapper, form } = await formWith(z.object({ told: z.boolean() }), () => [h(BaseCheckbox, { name: 'told', label: 'Told' })], { told: false })
    await wrapper.find('label input').setValue(true)
    expect(form.values).toEqual({ told: true })
  })
})

describe('BaseProblem in a form', () => {
  const refusal = toApiProblem(422, {
    code: 'invalid-input', requestId: 'r-1',
    errors: [{ pointer: '/email', code: 'email-taken' }, { pointer: '/elsewhere', code: 'too-few', params: { minimum: 2 } }],
  })

  it('puts findings at their fields and lists the others', async () => {
    const { wrapper, form } = await formWith(z.object({ email: z.string() }), () => [h(BaseInput, { name: 'email', label: 'E-mail' }), h(BaseProblem, { problem: refusal })], { email: 'a@example.org' })
    await settled()
    expect(form.errors.value.email).toBe('An account with this e-mail address exists.')
    expect(wrapper.findAll('[role=alert] li').map(item => item.text())).toEqual(['/elsewhere: Needs at least 2.'])
  })

  it('lists all of them outside a form', async () => {
    const wrapper = await mountSuspended(BaseProblem, { props: { problem: refusal } })
    expect(wrapper.findAll('li').map(item => item.text())).toEqual(['/email: An account with this e-mail address exists.', '/elsewhere: Needs at least 2.'])
  })
})
