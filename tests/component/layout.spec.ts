import { mountSuspended, registerEndpoint } from '@nuxt/test-utils/runtime'
import { beforeEach, describe, expect, it, vi } from 'vitest'
import type { ViewerView } from '#shared/contract/session'
import { clearNuxtData, clearNuxtState, useNuxtData } from '#imports'
import DefaultLayout from '~/layouts/default.vue'

const studyId = '01935f7e-6a5c-7c4e-9f1d-2b6a8f0c4d21'
const member: ViewerView = {
  person: { id: studyId, name: 'Ines Halloran', email: 'ines@example.org', installationRole: null },
  demo: false,
  memberships: [{ studyId, protocolNumber: 'LARKMOOR-204', title: 'Cough', roles: ['biostatistician'], cleared: false, exposed: false, blindHolds: true }],
}
const administrator: ViewerView = { person: { ...member.person, name: 'Ada Brandt', installationRole: 'administrator' }, demo: true, memberships: [] }

let answer: ViewerView = member
let open = 2
registerEndpoint('/api/me', () => answer)
registerEndpoint(`/api/studies/${studyId}/deviations`, () => ({ deviations: Array.from({ length: open }, () => ({ state: 'open' })) }))
vi.stubGlobal('useAuth', () => ({ signOut: () => Promise.resolve() })) // the module is off in component tests

const page = (route = `/studies/${studyId}/ledger`) => mountSuspended(DefaultLayout, { route, slots: { default: () => 'the page' } })
type Page = Awaited<ReturnType<typeof page>>
const linksOf = (wrapper: Page, place: string) => wrapper.findAll(`${place} nav a`).map(link => link.text().replace(/\s+/g, ' '))

beforeEach(() => {
  answer = member
  open = 2
  clearNuxtState()
  clearNuxtData()
})

describe('default layout', () => {
  it('cautions on every page and holds the page as main content', async () => {
    const wrapper = await page('/')
    expect(wrapper.find('aside').text()).toContain('a statistician answers for the analysis')
    expect(wrapper.find('main#content').text()).toBe('the page')
    expect(wrapper.find('a[href="#content"]').exists()).toBe(true)
  })

  it('marks a demonstration, and nothing else as one', async () => {
    expect((await page('/')).find('aside').text()).not.toContain('Demonstration')
    answer = { ...member, demo: true }
    expect((await page('/')).find('aside').text()).toContain('Demonstration')
  })

  it('says who is signed in, with which role, in which study', async () => {
    const text = (await page()).find('header').text()
    expect(text).toContain('Ines Halloran · Biostatistician')
    expect(text).toContain('LARKMOOR-204')
  })

  it('asks anew who is signed in each time it is mounted', async () => {
    (await page()).unmount()
    answer = administrator
    expect((await page('/')).find('header').text()).toContain('Ada Brandt · Administrator')
  })

  it('leads to the rooms of the study and marks the present one', async () => {
    const wrapper = await page()
    await vi.waitFor(() => expect(linksOf(wrapper, '.min-h-screen > div'))
      .toEqual(['Plan', 'Ledger', 'Extracts', 'Deviations 22 not settled', 'Memos', 'Record', 'People', 'Settings']))
    expect(wrapper.findAll('[aria-current=page]').map(link => link.text())).toEqual(['Ledger'])
  })

  it('counts no deviation when all are settled', async () => {
    open = 0
    const wrapper = await page()
    await vi.waitFor(() => expect(useNuxtData(`deviations.list {"params":{"studyId":"${studyId}"}}`).data.value).toEqual({ deviations: [] }))
    expect(linksOf(wrapper, '.min-h-screen > div')).toContain('Deviations')
  })

  it('offers an administrator only what an administrator may read', async () => {
    answer = administrator
    expect(linksOf(await page(`/studies/${studyId}/people`), '.min-h-screen > div')).toEqual(['People'])
  })

  it('folds the navigation into a menu that says whether it is open', async () => {
    const wrapper = await page()
    const button = wrapper.find('button[aria-controls=study-menu]')
    expect(button.attributes('aria-expanded')).toBe('false')
    expect(wrapper.find('#study-menu').exists()).toBe(false)
    await button.trigger('click')
    expect(button.attributes('aria-expanded')).toBe('true')
    expect(linksOf(wrapper, '#study-menu')).toContain('Ledger')
  })
})
