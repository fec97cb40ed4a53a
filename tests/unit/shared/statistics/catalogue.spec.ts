import { existsSync, readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { PROCEDURES, type ProcedureId } from '#shared/statistics/catalogue'
import { excessKurtosis } from '#shared/statistics/descriptive/excessKurtosis'
import { shareNotPositive } from '#shared/statistics/descriptive/notPositive'
import { skewness } from '#shared/statistics/descriptive/skewness'
import { bonferroni } from '#shared/statistics/multiplicity/bonferroni'
import { holm } from '#shared/statistics/multiplicity/holm'
import { andersonDarling } from '#shared/statistics/normality/andersonDarling'
import { shapiroWilk } from '#shared/statistics/normality/shapiroWilk'
import { brownForsythe } from '#shared/statistics/spread/brownForsythe'
import { sdRatio } from '#shared/statistics/spread/sdRatio'
import { catalogue } from '#shared/wording/catalogue'
import { normalSample } from '../../../helpers/randomSamples'

const root = new URL('../../../../', import.meta.url)
const text = (path: string) => readFileSync(new URL(path, root), 'utf8')
const entries = Object.entries(PROCEDURES) as [ProcedureId, typeof PROCEDURES[ProcedureId]][]

/** What each procedure is called with for a sample of n; the two of multiplicity refuse nothing. */
const attempts: Record<ProcedureId, (n: number) => unknown> = {
  'shapiro-wilk': n => shapiroWilk(normalSample(n, 1)),
  'anderson-darling': n => andersonDarling(normalSample(n, 1)),
  'skewness': n => skewness(normalSample(n, 1)),
  'excess-kurtosis': n => excessKurtosis(normalSample(n, 1)),
  'brown-forsythe': n => brownForsythe([normalSample(n, 1), normalSample(20, 2)]),
  'sd-ratio': n => sdRatio([normalSample(n, 1), normalSample(20, 2)]),
  'not-positive': n => shareNotPositive(normalSample(n, 1)),
  'bonferroni': n => bonferroni(normalSample(n, 1)),
  'holm': n => holm(normalSample(n, 1)),
}

describe('catalogue of procedures', () => {
  it.each(entries)('%s has its file, name, source and section', (_, { file, nameKey, source }) => {
    expect(existsSync(new URL(`shared/statistics/${file}.ts`, root))).toBe(true)
    const name = nameKey.split('.').reduce<unknown>((node, key) => Reflect.get(Object(node), key), catalogue.en)
    expect(name).toEqual(expect.stringMatching(/\S/))
    expect(text('docs/refs.bib')).toMatch(new RegExp(`^@\\w+\\{${source},`, 'm'))
    expect(text('docs/statistics.md')).toContain(`\`${file}.ts\``)
  })

  it.each(entries)('%s is defined from its least to its greatest n and not beyond', (id, { least, most }) => {
    expect(() => attempts[id](least)).not.toThrow()
    if (id !== 'bonferroni' && id !== 'holm') expect(() => attempts[id](least - 1)).toThrow(expect.objectContaining({ code: 'sample-too-small' }))
    if (most === null) return
    expect(() => attempts[id](most)).not.toThrow()
    expect(() => attempts[id](most + 1)).toThrow(expect.objectContaining({ code: 'sample-too-large' }))
  })
})
