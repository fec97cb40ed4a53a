import { mountSuspended } from '@nuxt/test-utils/runtime'
import { afterEach, describe, expect, it } from 'vitest'
import BaseSignature from '~/components/base/Signature.vue'
import { toApiProblem } from '~/utils/apiProblem'

const HASH = 'b2a5c1d4e7f80912a3b4c5d6e7f8091a2b3c4d5e6f708192a3b4c5d6e7f80911'
const props = { open: false, busy: false, problem: null, meaning: 'I release these verdicts.', hash: HASH }

let mounted: { unmount: () => void }[] = []
afterEach(() => {
  mounted.forEach(wrapper => wrapper.unmount())
  mounted = []
})

/** The dialog opened as a page does it, in the document so that focus and forms work. */
async function opened(more: object = {}) {
  const wrapper = await mountSuspended(BaseSignature, { props: { ...props, ...more }, attachTo: document.body })
  mounted.push(wrapper)
  await wrapper.setProps({ open: true })
  return wrapper
}

type Opened = Awaited<ReturnType<typeof opened>>
const passwordOf = (wrapper: Opened) => wrapper.find<HTMLInputElement>('input[name=password]')

async function fillIn(wrapper: Opened) {
  await wrapper.find('input[name=identifier]').setValue(' ines@example.org ')
  await passwordOf(wrapper).setValue('a long enough phrase')
}

describe('BaseSignature', () => {
  it('shows what the signature means and what is signed', async () => {
    const wrapper = await opened()
    expect(wrapper.text()).toContain('I release these verdicts.')
    expect(wrapper.text()).toContain(HASH.slice(0, 12))
    expect(wrapper.find('dialog').element.open).toBe(true)
  })

  it('has a name for those who do not see it', async () => {
    const wrapper = await opened()
    const label = wrapper.find('dialog').attributes('aria-labelledby')
    expect(wrapper.find(`[id="${label}"]`).text()).toBe('Signature')
  })

  it('gives back identifier, password and reason, and forgets the password', async () => {
    const wrapper = await opened({ reason: true })
    await fillIn(wrapper)
    await wrapper.find('textarea').setValue(' The file was corrected. ')
    await wrapper.find('form').trigger('submit')
    expect(wrapper.emitted('sign')).toEqual([[{ identifier: 'ines@example.org', password: 'a long enough phrase', reason: 'The file was corrected.' }]])
    expect(passwordOf(wrapper).element.value).toBe('')
  })

  it('forgets a password that was typed and not used', async () => {
    const wrapper = await opened()
    await fillIn(wrapper)
    await wrapper.setProps({ open: false })
    await wrapper.setProps({ open: true })
    expect(passwordOf(wrapper).element.value).toBe('')
  })

  it('signs nothing that is incomplete', async () => {
    const wrapper = await opened({ reason: true, reasonRequired: true })
    await fillIn(wrapper)
    await wrapper.find('form').trigger('submit')
    expect(wrapper.emitted('sign')).toBeUndefined()
    expect(wrapper.find('button[type=submit]').attributes()).toHaveProperty('disabled')
    await wrapper.find('textarea').setValue('Corrected.')
    await wrapper.find('form').trigger('submit')
    expect(wrapper.emitted('sign')).toHaveLength(1)
  })

  it('asks browsers for the right credentials', async () => {
    const wrapper = await opened()
    expect(wrapper.find('input[name=identifier]').attributes()).toMatchObject({ type: 'email', autocomplete: 'username' })
    expect(passwordOf(wrapper).attributes()).toMatchObject({ type: 'password', autocomplete: 'current-password' })
  })

  it('says why a signature was refused', async () => {
    const wrapper = await opened({ problem: toApiProblem(403, { code: 'signature-refused', requestId: 'r-7', errors: [] }) })
    const alert = wrapper.find('[role=alert]').text()
    expect(alert).toContain('identifier or password is wrong')
    expect(alert).toContain('r-7')
  })

  it('tells its parent once when Escape closes it', async () => {
    const wrapper = await opened()
    wrapper.find('dialog').element.close()
    await new Promise(resolve => setTimeout(resolve, 10))
    expect(wrapper.emitted('close')).toHaveLength(1)
  })
})
