import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { consistency } from '#shared/plan/consistency'
import { ENGINE_VERSION } from '#shared/decision/engineVersion'
import { judge } from '#shared/decision/judge'
import { canonicalText } from '#shared/record/canonical'
import { goldenInput, goldenPlan } from '../../../helpers/goldenInput'

// Reports as an engine version gave them. A report that differs needs a new version and, with it, a new file:
//   GOLDEN=write npx vitest run --project unit tests/unit/shared/decision/golden.spec.ts
// Files of earlier versions stay: they show what changed and when.
const fileOf = (purpose: string) => new URL(`./golden/${ENGINE_VERSION}-${purpose}.json`, import.meta.url)

describe('a stored report', () => {
  it('comes from a consistent plan', () => {
    expect(consistency(goldenPlan)).toEqual([])
  })

  it.each(['interim', 'database-lock'] as const)('is reproduced to the last digit: %s', (purpose) => {
    const report = JSON.stringify(judge(goldenInput(purpose)), null, 1)
    const file = fileOf(purpose)
    if (process.env.GOLDEN === 'write' && !existsSync(file)) writeFileSync(file, `${report}\n`)
    expect(`${report}\n`).toBe(readFileSync(file, 'utf8'))
  })

  it.each(['interim', 'database-lock'] as const)('is small, canonical and free of NaN: %s', (purpose) => {
    const text = canonicalText(judge(goldenInput(purpose)))
    expect(text.length).toBeLessThan(200_000)
    expect(JSON.parse(text)).toEqual(judge(goldenInput(purpose)))
  })
})
