import { readFileSync } from 'node:fs'
import { expect, it } from 'vitest'
import { PROBLEMS } from '#shared/contract/problems'
import { catalogue } from '#shared/wording/catalogue'

const documented = readFileSync(new URL('../../../../docs/errors.md', import.meta.url), 'utf8')
  .split('\n').filter(line => line.startsWith('| `'))

it('docs/errors.md lists every code with its status and text, and no other', () => {
  const expected = Object.entries(PROBLEMS).map(([code, status]) => `| \`${code}\` | ${status} | ${catalogue.en.problems[code as keyof typeof PROBLEMS]} |`)
  expect(documented).toEqual(expected)
})

it('the wording catalogue has no text for a code that there is not', () => {
  expect(Object.keys(catalogue.en.problems).filter(key => key !== 'detail').sort()).toEqual(Object.keys(PROBLEMS).sort())
})
