import type { NormalSource } from './source'

export const THORNEY_CUT = { name: 'thorney-118-look-1.csv', cutOff: '2026-09-15', purpose: 'interim' } as const

const rounded = (value: number) => Number(value.toFixed(1))

/** One open-label extract of 60 subjects; walking distance varies more under supervision. */
export function thorneyFile(source: NormalSource): string {
  const lines = ['USUBJID,SITEID,TRTP,PARAMCD,AVISIT,AVAL,BASE,AVALU,FASFL']
  for (let i = 0; i < 60; i++) {
    const arm = i % 2 === 0 ? 'WALK' : 'USUAL'
    const start = rounded(290 + 55 * source.normal())
    const walked = rounded(start + (arm === 'WALK' ? 42 + 62 * source.normal() : 25 + 24 * source.normal()))
    const grip = rounded(24 + 5 * source.normal())
    const gripped = rounded(grip + 0.8 + 2.2 * source.normal())
    const lead = `TH118-${String(i + 1).padStart(3, '0')},S${1 + (i % 4)},${arm}`
    lines.push(
      `${lead},SIXMW,Baseline,${start},${start},m,Y`, `${lead},SIXMW,Month 3,${walked},${start},m,Y`,
      `${lead},GRIP,Baseline,${grip},${grip},kg,Y`, `${lead},GRIP,Month 3,${gripped},${grip},kg,Y`,
    )
  }
  return `${lines.join('\n')}\n`
}
