import { Readable } from 'node:stream'
import { describe, expect, it } from 'vitest'
import type { Plan } from '#shared/plan/schema'
import { findFault, proposeMapping, readCsvExtract, readHead } from '../../../../server/readers/extractFile'
import { FINDINGS_KEPT } from '../../../../server/readers/findings'
import { readerPlan } from '../../../helpers/readerPlan'

const HEADER = 'USUBJID,SITEID,PARAMCD,AVISIT,AVAL,BASE,AVALU,DTYPE,FASFL,ANL01FL'
const stream = (text: string | Uint8Array) => Readable.from([Buffer.from(text)])
const fileOf = (...rows: string[]) => `${[HEADER, ...rows].join('\n')}\n`

/** A row of the file; what is not given is as it should be. */
function row(changes: Partial<Record<'id' | 'site' | 'param' | 'visit' | 'value' | 'base' | 'unit' | 'dtype' | 'fas' | 'anl', string>> = {}): string {
  const cells = { id: 'B12-001', site: 'S1', param: 'PAIN', visit: 'Week 8', value: '41.5', base: '60', unit: 'mm', dtype: '', fas: 'Y', anl: 'Y', ...changes }
  return [cells.id, cells.site, cells.param, cells.visit, cells.value, cells.base, cells.unit, cells.dtype, cells.fas, cells.anl].join(',')
}

async function read(text: string, plan: Plan = readerPlan()) {
  const head = await readHead(new TextEncoder().encode(text), true)
  const mapping = head && proposeMapping(plan, head, null).complete
  if (!mapping) throw new Error('the test file maps by itself')
  return readCsvExtract(stream(text), plan, mapping)
}

const findingsOf = async (text: string, plan?: Plan) => (await read(text, plan)).findings.list
const CRP = row({ param: 'CRP', unit: 'µg/mL' })

describe('readCsvExtract', () => {
  it('reads typed columns with the row of each in the file', async () => {
    const { columns, rows, subjects, findings } = await read(fileOf(row(), '', row({ id: 'B12-002', value: '', base: '1e1', dtype: 'LOCF' }), CRP))
    expect({ rows, subjects }).toEqual({ rows: 3, subjects: 2 })
    expect(findings).toEqual({ list: [], counts: { refuse: 0, hold: 0, warn: 0 } })
    expect(columns).toEqual({
      rows: 3, sourceRow: Uint32Array.of(2, 4, 5), subject: ['B12-001', 'B12-002', 'B12-001'], parameter: ['PAIN', 'PAIN', 'CRP'], visit: Array(3).fill('Week 8'),
      value: Float64Array.of(41.5, Number.NaN, 41.5), baseline: Float64Array.of(60, 10, 60), unit: ['mm', 'mm', 'µg/mL'],
      site: ['S1', 'S1', 'S1'], imputed: ['', 'LOCF', ''], arm: null, flags: { FASFL: ['Y', 'Y', 'Y'], ANL01FL: ['Y', 'Y', 'Y'] },
    })
  })

  it('takes away blanks that pad texts, and reads a unit that looks the same as the registered one', async () => {
    const { columns } = await read(fileOf(row({ fas: 'Y  ', visit: ' Week 8' }), CRP.replace('µ', 'μ')))
    expect(columns?.flags.FASFL?.[0]).toBe('Y')
    expect(columns?.visit?.[0]).toBe('Week 8')
    expect(columns?.unit?.[1]).toBe('µg/mL')
  })

  it.each([
    ['text in a number', row({ value: '12;5' }), { code: 'not-a-number', row: 3, column: 'AVAL', params: { text: '12;5', looks: 'other' } }],
    ['a value below a limit', row({ base: '<5' }), { code: 'not-a-number', row: 3, column: 'BASE', params: { text: '<5', looks: 'censored' } }],
    ['a row of another width', `${row()},more`, { code: 'row-width', row: 3, column: null, params: { cells: 11, columns: 10 } }],
    ['a row without subject', row({ id: ' ' }), { code: 'subject-missing', row: 3, column: 'USUBJID', params: {} }],
  ])('refuses %s with its place', async (_, bad, finding) => {
    const { columns, findings } = await read(fileOf(CRP, bad, row()))
    expect(columns).toBeNull()
    expect(findings.list).toEqual([{ severity: 'refuse', ...finding }])
  })

  it('refuses a header without rows', async () => {
    expect(await findingsOf(`${HEADER}\n`)).toEqual([{ severity: 'refuse', code: 'header-only', row: 1, column: null, params: {} }])
  })

  it('refuses a file that breaks off as binary further down, with what was found before', async () => {
    const { columns, findings } = await read(`${fileOf(row({ value: 'x' }))}B12-003,\u0000\n`)
    expect(columns).toBeNull()
    expect(findings.list.map(({ code, row }) => [code, row])).toEqual([['binary', 3], ['not-a-number', 2]])
    expect(findings.counts.refuse).toBe(2)
  })

  it('counts every finding and keeps the first ones', async () => {
    const rows = Array.from({ length: FINDINGS_KEPT + 20 }, () => row({ value: 'x' }))
    const { findings } = await read(fileOf(...rows, row({ id: '=1' })))
    expect(findings.counts).toEqual({ refuse: FINDINGS_KEPT + 20, hold: 0, warn: 1 })
    expect(findings.list).toHaveLength(FINDINGS_KEPT)
  })

  it.each([
    ['other case', 'b12-001', 'id-case-or-blanks', { id: 'b12-001', other: 'B12-001', first: 2 }],
    ['blanks inside', 'B12- 001', 'id-case-or-blanks', { id: 'B12- 001', other: 'B12-001', first: 2 }],
    ['dropped zeros', 'B12-1', 'id-leading-zeros', { id: 'B12-1', other: 'B12-001', first: 2 }],
    ['blanks around', 'B12-002 ', 'id-blanks', { id: 'B12-002 ' }],
    ['a formula', '=SUM(A1)', 'formula', { text: '=SUM(A1)' }],
    ['a control character', 'B12-00\u00072', 'control-character', {}],
  ])('warns about an id with %s', async (_, id, code, params) => {
    const { columns, findings } = await read(fileOf(row(), row({ id }), CRP))
    expect(columns).not.toBeNull()
    expect(findings.list).toEqual([{ severity: 'warn', code, row: 3, column: 'USUBJID', params }])
  })

  it('warns about numeric ids that are shorter than those with leading zeros', async () => {
    const list = await findingsOf(fileOf(row({ id: '17' }), row({ id: '0042' }), CRP.replace('B12-001', '0043')))
    expect(list).toEqual([{ severity: 'warn', code: 'id-shorter', row: 2, column: 'USUBJID', params: { id: '17', width: 4, first: 3 } }])
  })

  it('does not warn about negative numbers, dashes and flags', async () => {
    expect(await findingsOf(fileOf(row({ value: '-4', site: '-' }), CRP))).toEqual([])
  })

  it('warns about an endpoint of which there is no row', async () => {
    expect(await findingsOf(fileOf(row()))).toEqual([{ severity: 'warn', code: 'endpoint-absent', row: null, column: 'PARAMCD', params: { endpoint: 'CRP' } }])
  })

  it('states a separator that is not the comma', async () => {
    const text = fileOf(row(), CRP).replaceAll(',', ';')
    expect(await findingsOf(text)).toEqual([{ severity: 'warn', code: 'separator-semicolon', row: 1, column: null, params: {} }])
  })

  it('counts every row as without a unit when there is no column for it', async () => {
    const text = fileOf(row(), CRP)
    const mapping = { subject: ['USUBJID'], parameter: 'PARAMCD', visit: 'AVISIT', value: 'AVAL', baseline: 'BASE', unit: null, site: null, imputed: null, arm: null, flags: { FASFL: 'FASFL', ANL01FL: 'ANL01FL' } }
    const { columns, findings } = await readCsvExtract(stream(text), readerPlan(), mapping)
    expect(columns?.unit).toEqual(['', ''])
    expect(findings.list.map(({ code }) => code)).toEqual(['no-unit-column'])
  })
})

describe('dates', () => {
  const mapping = { subject: ['USUBJID'], parameter: 'PARAMCD', visit: 'AVISIT', value: 'AVAL', baseline: 'BASE', unit: 'AVALU', site: null, imputed: null, arm: null, flags: { FASFL: 'FASFL', ANL01FL: 'ANL01FL' } }
  const dated = (...dates: string[]) => [`${HEADER},ADT`, `${CRP},`, ...dates.map(date => `${row()},${date}`)].join('\n')
  const read = (cutOff: string | null, ...dates: string[]) => readCsvExtract(stream(dated(...dates)), readerPlan(), mapping, cutOff)

  it('that do not exist refuse the file', async () => {
    const { columns, findings } = await read(null, '2026-02-28', '2026-02-30')
    expect(columns).toBeNull()
    expect(findings.list).toEqual([{ severity: 'refuse', code: 'date-impossible', row: 4, column: 'ADT', params: { text: '2026-02-30' } }])
  })

  it('after the cut-off are warned about, partial ones as far as they go', async () => {
    const { findings } = await read('2026-03-15', '2026-03-15', '2026-03-16', '2026-03', '2026-04', '16.03.2026')
    expect(findings.list.map(({ code, row, params }) => [code, row, params.date])).toEqual([['after-cut-off', 4, '2026-03-16'], ['after-cut-off', 6, '2026-04']])
  })
})

describe('arms of an open-label extract', () => {
  const open = readerPlan({ blinding: 'open-label' })
  const withArm = (...rows: (readonly [string, string])[]) => [`${HEADER},TRTP`, ...rows.map(([line, arm]) => `${line},${arm}`)].join('\n')

  it('are read by code or label', async () => {
    const { columns } = await read(withArm([row(), 'ACT'], [row({ id: 'B12-002' }), 'Placebo'], [row({ id: 'B12-003' }), ''], [CRP, 'Active 20 mg']), open)
    expect(columns?.arm).toEqual(['ACT', 'PBO', '', 'ACT'])
  })

  it('are refused when the plan does not know one, or a subject has two', async () => {
    const list = await findingsOf(withArm([row(), 'ACT'], ...Array.from({ length: 20 }, () => [row(), 'ACT'] as const), [row({ id: 'B12-002' }), 'act'], [CRP, 'PBO']), open)
    expect(list).toEqual([
      { severity: 'refuse', code: 'unknown-arm', row: 23, column: 'TRTP', params: { text: 'act' } },
      { severity: 'refuse', code: 'subject-two-arms', row: 24, column: 'TRTP', params: { subject: 'B12-001' } },
    ])
  })
})

describe('readHead', () => {
  const bytes = new TextEncoder().encode(fileOf(row(), row({ id: 'B12-002' })))

  it('gives header and first rows', async () => {
    const head = await readHead(bytes, true)
    expect(head).toMatchObject({ delimiter: 'comma', header: HEADER.split(',') })
    expect(head?.preview.map(([id]) => id)).toEqual(['B12-001', 'B12-002'])
  })

  it('leaves out a line that is cut off', async () => {
    expect((await readHead(bytes.subarray(0, bytes.length - 5), false))?.preview).toHaveLength(1)
  })

  it('is null where there is none to read, and the whole file says why', async () => {
    for (const [content, code] of [['', 'empty-file'], ['\u0000\u0001', 'binary'], ['"A,B', 'quotes']] as const) {
      expect(await readHead(new TextEncoder().encode(content), true)).toBeNull()
      expect(await findFault(stream(content))).toMatchObject({ code, severity: 'refuse' })
    }
    expect(await findFault(stream(bytes))).toBeNull()
  })
})
