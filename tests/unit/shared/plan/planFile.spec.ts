import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import type { ZodTypeAny } from 'zod'
import { z } from 'zod'
import { parsePlan } from '#shared/plan/parsePlan'
import { planSchema } from '#shared/plan/schema'

const page = readFileSync(new URL('../../../../docs/plan-file.md', import.meta.url), 'utf8')

/** Every member name and every word of a closed list that a schema knows. */
function namesIn(schema: ZodTypeAny): string[] {
  if (schema instanceof z.ZodObject) return Object.entries(schema.shape as Record<string, ZodTypeAny>).flatMap(([name, member]) => [name, ...namesIn(member)])
  if (schema instanceof z.ZodArray) return namesIn(schema.element as ZodTypeAny)
  if (schema instanceof z.ZodNullable) return namesIn(schema.unwrap() as ZodTypeAny)
  if (schema instanceof z.ZodEffects) return namesIn(schema.innerType() as ZodTypeAny)
  if (schema instanceof z.ZodEnum) return [...schema.options as string[]]
  if (schema instanceof z.ZodLiteral) return [String(schema.value)]
  if (schema instanceof z.ZodDiscriminatedUnion) return [...schema.options as ZodTypeAny[]].flatMap(namesIn)
  return []
}

describe('docs/plan-file.md', () => {
  it('shows a plan that is accepted', () => {
    const example = /```json\n([\s\S]*?)```/.exec(page)?.[1] ?? ''
    expect(parsePlan(JSON.parse(example))).toMatchObject({ ok: true })
  })

  it('names every field and every word that a plan may have', () => {
    const names = new Set(namesIn(planSchema))
    expect(names.size).toBeGreaterThan(120)
    expect([...names].filter(name => !page.includes(`\`${name}\``))).toEqual([])
  })
})
