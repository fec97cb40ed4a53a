import { describe, expect, it } from 'vitest'
import { clash } from '#shared/access/separation'

describe('clash', () => {
  it('finds the earlier duty in the same hand', () => {
    expect(clash('plan.sign-reviewer', 'a', { 'plan.author': ['a'] })).toBe('plan.author')
    expect(clash('deviation.settle', 'r', { 'extract.upload': ['u'], 'release.sign': ['r'] })).toBe('release.sign')
    expect(clash('release.sign', 's', { 'deviation.settle': ['t', 's'] })).toBe('deviation.settle')
    expect(clash('deviation.settle-second', 'f', { 'extract.upload': [], 'release.sign': [], 'overrule.first': ['f'] })).toBe('overrule.first')
  })

  it('is silent when the duties lie in different hands or nobody has done the earlier one', () => {
    expect(clash('query.resolve', 'a', { 'extract.upload': ['b'] })).toBeNull()
    expect(clash('clearance.grant', 'a', { 'clearance.hold': ['b'], 'clearance.propose': ['c'] })).toBeNull()
    expect(clash('extract.give-reason', 'a', { 'extract.upload': [] })).toBeNull()
  })
})
