import { describe, expect, it } from 'vitest'
import { ACTIONS, opensToAdministrators, refusal, type Action, type Standing } from '#shared/access/actions'

const nobody: Standing = { installationRole: null, studyRoles: [], cleared: false, exposed: false, blindHolds: true }
const biostatistician: Standing = { ...nobody, studyRoles: ['biostatistician'] }
const administrator: Standing = { ...nobody, installationRole: 'administrator' }
const actions = Object.keys(ACTIONS) as Action[]

describe('refusal', () => {
  it('opens to nobody without a role anything but their own account', () => {
    expect(actions.filter(action => refusal(action, nobody) === null)).toEqual(['own.read'])
  })

  it('never lets an administrator sign, judge or see a study\'s content', () => {
    const open = actions.filter(action => refusal(action, administrator) === null)
    expect(open.some(action => 'signed' in ACTIONS[action])).toBe(false)
    expect(open.filter(action => opensToAdministrators(action))).toEqual(open)
    expect(open).not.toContain('study.read')
  })

  it.each([
    ['a cleared biostatistician', { ...biostatistician, cleared: true }],
    ['an exposed one whose clearance has ended', { ...biostatistician, exposed: true }],
  ])('keeps %s from authoring and settling while the blind holds', (_, standing) => {
    for (const action of ['plan.author', 'plan.sign-author', 'plan.sign-reviewer', 'query.resolve', 'deviation.settle', 'memo.sign'] as const) {
      expect(refusal(action, standing)).toBe('exposed')
      expect(refusal(action, { ...standing, blindHolds: false })).toBeNull()
    }
  })

  it('shows arms to the cleared alone, exposure without clearance does not suffice', () => {
    for (const action of ['allocation.read', 'allocation.upload', 'arms.read', 'release.preview', 'release.sign'] as const) {
      expect(refusal(action, biostatistician)).toBe('not-permitted')
      expect(refusal(action, { ...biostatistician, exposed: true })).toBe('not-permitted')
      expect(refusal(action, { ...biostatistician, cleared: true })).toBeNull()
    }
  })

  it('gives clearance no weight beside another role', () => {
    expect(refusal('arms.read', { ...nobody, studyRoles: ['data-manager'], cleared: true })).toBe('not-permitted')
  })
})
