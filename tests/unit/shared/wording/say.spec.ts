import { describe, expect, it } from 'vitest'
import { catalogue } from '#shared/wording/catalogue'
import { say } from '#shared/wording/say'

/** Every message of the catalogue with its key. */
function messages(node: object, lead = ''): [string, string][] {
  return Object.entries(node).flatMap(([key, value]) => typeof value === 'string'
    ? [[`${lead}${key}`, value] as [string, string]]
    : messages(value as object, `${lead}${key}.`))
}

describe('say', () => {
  it('fills in parameters', () => {
    expect(say('en', 'pages.ledger.lead', { version: 2 })).toBe('Each planned analysis against each extract. Plan version 2, signed')
  })

  it('chooses between singular and plural by n', () => {
    expect(say('en', 'pages.extracts.openQueries', { n: 1 })).toBe('1 data query open')
    expect(say('en', 'pages.extracts.openQueries', { n: 3 })).toBe('3 data queries open')
  })

  it('refuses a key that the catalogue lacks', () => {
    expect(() => say('en', 'base.nothingOfTheKind')).toThrow('no wording for base.nothingOfTheKind')
  })

  it.each(messages(catalogue.en))('%s compiles and leaves no brace behind', (key, message) => {
    const names = [...message.matchAll(/\{(\w+)\}/g)].map(([, name]) => name!)
    const said = say('en', key, Object.fromEntries(names.map(name => [name, name === 'n' ? 2 : 'x'])))
    expect(said).not.toMatch(/[{}]/)
    expect(said.trim()).not.toBe('')
  })
})
