import { describe, expect, it } from 'vitest'
import { allows, lockFaults } from '../../../scripts/lock-engines.mjs'

const least = [20, 19, 0] as const

describe('allows', () => {
  it.each([
    '*', '', '>=18', '>= 18.0', '>=20.x', '>20.18', '20', '20.x', '20.19', '^20.19.0', '^20.0.0', '~20.19.0', '~20', '=20.19.0', 'v20.19.0',
    '<21', '<=20', '<=20.19', '18 - 22', '>=18 <21', '>=16 || 14 >=14.17', '^18.18.0 || ^20.9.0 || >=21.1.0', '>=20.0.0-rc.1',
  ])('%j takes 20.19.0', range => expect(allows(range, least)).toBe(true))

  it.each([
    '>=20.19.1', '>=20.20', '>=22', '>20', '>20.19', '>20.19.0', '^20.19.1', '^22.12.0', '^18', '~20.18.0', '~20.19.2', '18', '20.18', '20.19.1',
    '<20', '<20.19.0', '<=18', '18 - 20.18', '>=18 <20', '^18.18.0 || >=22.0.0', '^0.10.0 || ^0.12.0',
  ])('%j refuses 20.19.0', range => expect(allows(range, least)).toBe(false))

  it('keeps a caret below 1 within its minor version', () => {
    expect(allows('^0.10.0', [0, 10, 3])).toBe(true)
    expect(allows('^0.10.0', [0, 11, 0])).toBe(false)
  })
})

describe('lockFaults', () => {
  it('names packages that refuse the least Node.js, and download addresses', () => {
    const packages = {
      '': {}, 'node_modules/fits': { engines: { node: '>=18' } }, 'node_modules/mute': { engines: {} },
      'node_modules/newer': { engines: { node: '>=22' } }, 'node_modules/from': { resolved: 'https://registry.example/from.tgz' },
    }
    expect(lockFaults({ packages }, least)).toEqual(['node_modules/newer wants Node.js >=22.', 'node_modules/from has a field "resolved".'])
  })
})
