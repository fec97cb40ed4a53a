import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { readFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { fileURLToPath } from 'node:url'
import { join } from 'node:path'
import { afterAll, describe, expect, it } from 'vitest'
import type { SeenReport } from '#shared/decision/report'
import type { Plan } from '#shared/plan/schema'
import { runCheck } from '../../../../server/cli/runCheck'
import { insectPlan, plantPlan, sleepPlan } from '../../../reference/openPlans'

const folder = mkdtempSync(join(tmpdir(), 'check-'))
afterAll(() => rmSync(folder, { recursive: true }))

const data = (name: string) => fileURLToPath(new URL(`../../../reference/data/${name}`, import.meta.url))

function file(name: string, content: string): string {
  const path = join(folder, name)
  writeFileSync(path, content)
  return path
}

const planFile = (plan: Plan) => file(`${plan.protocol.number}.json`, JSON.stringify(plan))
const check = (plan: Plan, extract: string, ...more: string[]) => runCheck(['--plan', planFile(plan), '--extract', extract, ...more])
const insects = (...more: string[]) => check(insectPlan, data('insect-sprays.csv'), ...more)
const list = ['--allocation', data('insect-sprays-list.csv')]
const reportIn = (out: string): SeenReport => (JSON.parse(out) as { report: SeenReport }).report
const only = (plan: Plan, id: string): Plan => ({ ...plan, analyses: plan.analyses.filter(analysis => analysis.id === id) })

describe('exit codes', () => {
  it('0 when every planned method stands, 3 when something else applies', async () => {
    expect((await check(only(plantPlan, 'ALL'), data('plant-growth.csv'))).code).toBe(0)
    expect((await check(plantPlan, data('plant-growth.csv'))).code).toBe(3)
    expect((await check(sleepPlan, data('sleep.csv'))).code).toBe(3)
  })

  it('4 when something is not assessable, to whoever may have arms', async () => {
    expect((await insects('--arms')).code).toBe(4)
    expect((await insects('--arms', ...list)).code).toBe(3)
  })

  it('5 for a blinded plan without --arms, whatever the verdicts are', async () => {
    expect([(await insects()).code, (await insects(...list)).code]).toEqual([5, 5])
  })
})

describe('what is said', () => {
  it('is a table of verdicts with their figures, and what the report is not', async () => {
    const { out } = await check(plantPlan, data('plant-growth.csv'))
    expect(out).toMatch(/^Yield, two treatments +two-sample t-test, pooled variance +fallback applies: Welch t-test$/m)
    expect(out).toMatch(/^ {2}spread +Equal spread +not met +Ratio of SDs 1\.793, 1 to 3\.598, limit 1\.5; Brown–Forsythe F 2\.104, p = 0\.1641, limit 0\.05$/m)
    expect(out).toMatch(/^ {2}within +Normality +met +ctrl, n = 10: Skewness G1 0\.321/m)
    expect(out).toMatch(/^ +trt1, n = 10; trt2, n = 10$/m)
    expect(out).toContain('This report is not in the ledger and is no registered look.')
    expect(out).toContain('gives no medical advice')
    expect(out).not.toMatch(/undefined|NaN|\{|\[object/)
  })

  it('names what a step asked for when the walk reached it', async () => {
    const { out } = await insects('--arms', ...list)
    expect(out).toMatch(/^ {2}Step: one-way ANOVA of log values, applies$/m)
    expect(out).toMatch(/^ {2}positive +Positive values +met +n = 72: Values not above zero 0, limit 0$/m)
    expect(out).toMatch(/no registered method applies$/m)
  })

  it('is aligned', async () => {
    const { out } = await check(plantPlan, data('plant-growth.csv'))
    const [head, ...rows] = out.split('\n').slice(3, 6)
    for (const row of rows) expect(row.slice(0, head!.indexOf('Verdict'))).toMatch(/ {2}$/)
  })

  it('carries every figure in JSON, those formed with arms only with --arms', async () => {
    const blinded = reportIn((await insects(...list, '--json')).out)
    const whole = reportIn((await insects(...list, '--json', '--arms')).out)
    expect(blinded.analyses[0]).toMatchObject({ verdict: { word: 'held-behind-the-blind' }, byArm: null, plot: null, prerequisites: [{ verdict: 'held', samples: [] }, { verdict: 'held', figures: [] }, { verdict: 'met' }] })
    expect(whole.analyses[0]!.byArm).toHaveLength(6)
    expect(blinded.allocation.hash).toBeNull()
    expect((await insects(...list, '--json')).out).toContain('"ledger":"This report is not in the ledger')
  })

  it('is the same to someone not cleared whatever the list says, also as text', async () => {
    const text = await readFile(data('insect-sprays-list.csv'), 'utf8')
    const turned = file('turned.csv', text.replaceAll('Spray A', 'Spray X').replaceAll('Spray F', 'Spray A').replaceAll('Spray X', 'Spray F'))
    const other = ['--allocation', turned]
    expect(await insects(...other)).toEqual(await insects(...list))
    expect(await insects(...other, '--json')).toEqual(await insects(...list, '--json'))
  })

  it('follows cut-off and purpose', async () => {
    const { out } = await check(plantPlan, data('plant-growth.csv'), '--json', '--cut-off', '2026-05-01', '--purpose', 'database-lock')
    expect(reportIn(out).extract).toMatchObject({ cutOff: '2026-05-01', purpose: 'database-lock', standing: 'outside-ledger', look: null })
  })
})

describe('bad input ends with 2 and names its place', () => {
  const plants = planFile(plantPlan)
  it.each<[string, string[], string]>([
    ['no plan', ['--extract', 'x.csv'], '--plan is missing'],
    ['an option that there is not', ['--plan', plants, '--extrakt', 'x.csv'], '--extrakt'],
    ['a cut-off that is no date', ['--plan', plants, '--extract', 'x.csv', '--cut-off', '2026-02-30'], '--cut-off'],
    ['another purpose', ['--plan', plants, '--extract', 'x.csv', '--purpose', 'final'], '--purpose'],
    ['a plan that is not there', ['--plan', join(folder, 'none.json'), '--extract', 'x.csv'], 'none.json: cannot be read (ENOENT)'],
    ['a plan that is not JSON', ['--plan', file('text.json', 'plan'), '--extract', 'x.csv'], 'text.json: is not JSON'],
    ['a plan that is wrong', ['--plan', file('wrong.json', JSON.stringify({ ...plantPlan, analyses: [{ ...plantPlan.analyses[0], endpoint: 'NOPE' }] })), '--extract', 'x.csv'], '/analyses/0/endpoint: The plan has no endpoint NOPE.'],
    ['an extract that is not there', ['--plan', plants, '--extract', join(folder, 'none.csv')], 'none.csv: cannot be read'],
    ['an empty extract', ['--plan', plants, '--extract', file('empty.csv', '')], 'empty.csv'],
    ['text for a number', ['--plan', plants, '--extract', file('text.csv', 'USUBJID,TRTP,PARAMCD,AVISIT,AVAL,AVALU,FASFL\nP1,ctrl,WEIGHT,Harvest,<5,g,Y\n')], 'row 2, column AVAL'],
    ['a column that is missing', ['--plan', plants, '--extract', file('short.csv', 'USUBJID,TRTP,PARAMCD,AVISIT,AVALU,FASFL\nP1,ctrl,WEIGHT,Harvest,g,Y\n')], 'column AVAL'],
    ['an unknown arm', ['--plan', planFile(insectPlan), '--extract', data('insect-sprays.csv'), '--allocation', file('list.csv', 'USUBJID,TRT01P\nU01,Spray Z\n')], 'row 2'],
    ['a list for an open-label plan', ['--plan', plants, '--extract', data('plant-growth.csv'), ...list], '--allocation'],
    ['a treatment column without --arms', ['--plan', planFile({ ...plantPlan, blinding: 'blinded', protocol: { ...plantPlan.protocol, number: 'BLINDED' } }), '--extract', data('plant-growth.csv')], 'column TRTP'],
  ])('%s', async (_, args, place) => {
    const { code, out, errors } = await runCheck(args)
    expect({ code, out }).toEqual({ code: 2, out: '' })
    expect(errors.join('\n')).toContain(place)
    expect(errors.join('\n')).not.toMatch(/ {4}at /)
  })
})
