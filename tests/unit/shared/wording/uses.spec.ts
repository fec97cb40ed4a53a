import { fileURLToPath } from 'node:url'
import { describe, expect, it } from 'vitest'
import { PROBLEMS } from '#shared/contract/problems'
import { MEASURES } from '#shared/decision/report'
import { ANALYSIS_VERDICTS, PREREQUISITE_VERDICTS, REASONS } from '#shared/plan/terms'
import { catalogue } from '#shared/wording/catalogue'
import { wordingUses } from '../../../helpers/wordingUses'

const root = fileURLToPath(new URL('../../../../', import.meta.url))
const uses = wordingUses(['app', 'server', 'shared'].map(folder => `${root}${folder}`))

const at = (key: string): unknown => key.split('.').reduce<unknown>((node, part) =>
  typeof node === 'object' && node !== null ? (node as Record<string, unknown>)[part] : undefined, catalogue.en)

const placeholders = (message: unknown) => typeof message === 'string' ? [...message.matchAll(/\{(\w+)\}/g)].map(([, name]) => name!) : []
const place = (file: string) => file.slice(root.length)

describe('words that the sources ask for', () => {
  it('finds the calls at all', () => {
    expect(uses.filter(({ keys }) => keys.includes('base.skip'))).toHaveLength(1)
    expect(uses.some(({ prefixes }) => prefixes.includes('verdict.reason'))).toBe(true)
  })

  it('exist', () => {
    const missing = uses.flatMap(({ file, keys }) => keys.filter(key => typeof at(key) !== 'string').map(key => `${place(file)}: ${key}`))
    expect(missing).toEqual([])
  })

  it('have the namespace that a key completed at run time begins with', () => {
    const missing = uses.flatMap(({ file, prefixes }) => prefixes.filter(prefix => typeof at(prefix) !== 'object').map(prefix => `${place(file)}: ${prefix}`))
    expect(missing).toEqual([])
  })

  it('are given every parameter that the message names', () => {
    const lacking = uses.flatMap(({ file, keys, names }) => names === null
      ? []
      : keys.flatMap(key => placeholders(at(key)).filter(name => !names.includes(name)).map(name => `${place(file)}: ${key} {${name}}`)))
    expect(lacking).toEqual([])
  })

  it('use every parameter that they are given', () => {
    const unused = uses.flatMap(({ file, keys, prefixes, names }) => {
      if (names === null || keys.length === 0 || prefixes.length > 0 || keys.some(key => at(key) === undefined)) return []
      const named = keys.flatMap(key => placeholders(at(key)))
      return names.filter(name => name !== 'n' && !named.includes(name)).map(name => `${place(file)}: ${keys.join(' | ')} {${name}}`)
    })
    expect(unused).toEqual([])
  })
})

describe('closed lists', () => {
  it.each([
    ['verdict.word', [...ANALYSIS_VERDICTS, 'held-behind-the-blind']],
    ['verdict.short', [...ANALYSIS_VERDICTS, 'held-behind-the-blind']],
    ['verdict.prerequisite', [...PREREQUISITE_VERDICTS, 'held']],
    ['verdict.reason', REASONS],
    ['verdict.measure', MEASURES],
  ])('%s has a word for each member and no other', (key, members) => {
    expect(Object.keys(at(key) as object).toSorted()).toEqual([...members].toSorted())
  })

  it('has a sentence for every problem code', () => {
    expect(Object.keys(PROBLEMS).filter(code => typeof at(`problems.${code}`) !== 'string')).toEqual([])
  })
})
