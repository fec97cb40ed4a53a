import { describe, expect, it } from 'vitest'
import { installedAsLocked } from '../../../scripts/dependencies.mjs'

const locked = {
  '': { version: '0.1.0' },
  'node_modules/a': { version: '1.0.0' },
  'node_modules/a/node_modules/b': { version: '2.0.0' },
  'node_modules/for-another-system': { version: '3.0.0', optional: true },
}
const installed = { 'node_modules/a': { version: '1.0.0' }, 'node_modules/a/node_modules/b': { version: '2.0.0' } }

describe('installedAsLocked', () => {
  it('takes packages for other systems as dispensable', () => {
    expect(installedAsLocked(locked, installed)).toBe(true)
  })

  it.each([
    ['nothing is installed', {}],
    ['a package is missing', { 'node_modules/a': { version: '1.0.0' } }],
    ['a version differs', { ...installed, 'node_modules/a': { version: '1.0.1' } }],
    ['a package stands elsewhere', { 'node_modules/a': { version: '1.0.0' }, 'node_modules/b': { version: '2.0.0' } }],
    ['there is a package too many', { ...installed, 'node_modules/c': { version: '1.0.0' } }],
  ])('is false when %s', (_, found) => {
    expect(installedAsLocked(locked, found)).toBe(false)
  })
})
