import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import BaseButton from '~/components/base/Button.vue'
import BaseHash from '~/components/base/Hash.vue'
import BaseMark from '~/components/base/Mark.vue'
import BaseTable from '~/components/base/Table.vue'
import BaseTime from '~/components/base/Time.vue'

const STATES = ['ok', 'fallback', 'none', 'not-assessable', 'held'] as const

describe('BaseMark', () => {
  it('differs in shape from state to state, before any colour', async () => {
    const shapes = await Promise.all(STATES.map(async state => (await mountSuspended(BaseMark, { props: { state } })).find('svg').html()))
    expect(new Set(shapes).size).toBe(STATES.length)
  })

  it.each(STATES)('says %s in words and keeps the leaf out of the reading', async (state) => {
    const mark = await mountSuspended(BaseMark, { props: { state }, slots: { default: () => 'planned method stands' } })
    expect(mark.text()).toBe('planned method stands')
    expect(mark.find('svg').attributes('aria-hidden')).toBe('true')
  })
})

describe('BaseTable', () => {
  const rows = { default: () => 'rows' }

  it('names the scrolling region and the table by its caption', async () => {
    const table = await mountSuspended(BaseTable, { props: { caption: 'Verdicts' }, slots: rows })
    expect(table.find('caption').text()).toBe('Verdicts')
    expect(table.attributes()).toMatchObject({ 'role': 'region', 'aria-label': 'Verdicts', 'tabindex': '0' })
  })

  it('fixes the first column only when asked', async () => {
    const fixed = await mountSuspended(BaseTable, { props: { caption: 'Verdicts', sticky: true }, slots: rows })
    const loose = await mountSuspended(BaseTable, { props: { caption: 'Verdicts' }, slots: rows })
    expect(fixed.find('table').classes()).toContain('sticky')
    expect(loose.find('table').classes()).not.toContain('sticky')
  })
})

describe('BaseHash', () => {
  it('shows twelve digits, the whole on demand, and always says the whole', async () => {
    const hash = 'b2a5c1d4e7f80912a3b4c5d6e7f8091a2b3c4d5e6f708192a3b4c5d6e7f80911'
    const shown = await mountSuspended(BaseHash, { props: { hash } })
    const button = shown.find('button')
    expect(button.text()).toBe('b2a5c1d4e7f8')
    expect(button.attributes('aria-label')).toContain(hash)
    await button.trigger('click')
    expect(button.text()).toBe(hash)
    expect(button.attributes('aria-expanded')).toBe('true')
  })
})

describe('BaseTime', () => {
  it('reads in UTC and keeps the exact moment', async () => {
    const time = await mountSuspended(BaseTime, { props: { at: '2026-06-12T09:14:05.123Z' } })
    expect(time.text()).toBe('12 Jun 2026, 09:14 UTC')
    expect(time.attributes('datetime')).toBe('2026-06-12T09:14:05.123Z')
  })
})

describe('BaseButton', () => {
  it('is off and says so while it is busy', async () => {
    const button = await mountSuspended(BaseButton, { props: { busy: true }, slots: { default: () => 'Save' } })
    expect(button.attributes()).toMatchObject({ 'type': 'button', 'disabled': '', 'aria-busy': 'true' })
    expect(button.text()).toBe('Save (working)')
  })

  it('is a link when it leads to a page or a file', async () => {
    const page = await mountSuspended(BaseButton, { props: { to: '/people' }, slots: { default: () => 'People' } })
    const file = await mountSuspended(BaseButton, { props: { href: '/api/file' }, attrs: { download: '' }, slots: { default: () => 'Plan file' } })
    expect(page.find('a').attributes('href')).toBe('/people')
    expect(file.find('a').attributes()).toMatchObject({ href: '/api/file', download: '' })
  })
})
