import { Readable } from 'node:stream'
import { describe, expect, it } from 'vitest'
import { plannedArms, readAllocation } from '../../../../server/readers/allocationList'
import { readerPlan } from '../../../helpers/readerPlan'

const read = (text: string, subjectColumns?: string[]) => readAllocation(Readable.from([Buffer.from(text)]), readerPlan(), subjectColumns)
const findings = async (text: string) => (await read(text)).findings.list.map(({ code, row, column, params }) => ({ code, row, column, params }))

describe('readAllocation', () => {
  it('reads subject, planned and actual arm and stratum, arms by code or label', async () => {
    const list = await read('\uFEFFUSUBJID;TRT01P;TRT01A;STRATUM\nB1;ACT;PBO;north\nB2;Placebo;;\n')
    expect(list.subjects).toEqual([
      { subject: 'B1', planned: 'ACT', actual: 'PBO', stratum: 'north' },
      { subject: 'B2', planned: 'PBO', actual: null, stratum: null },
    ])
    expect(plannedArms(list.subjects)).toEqual({ B1: 'ACT', B2: 'PBO' })
  })

  it('takes the column that holds the plan\'s arms where two could', async () => {
    expect((await read('SUBJID,ARMCD,ARM\n1,A,Placebo\n')).subjects).toMatchObject([{ planned: 'PBO' }])
  })

  it('joins the columns that make a subject in this study\'s extracts', async () => {
    expect((await read('SUBJID,SITEID,ARM\n7,S1,ACT\n7,S2,PBO\n', ['SITEID', 'SUBJID'])).subjects.map(({ subject }) => subject)).toEqual(['S1/7', 'S2/7'])
  })

  it.each([
    ['an unknown arm', 'USUBJID,ARM\nB1,ACT\nB2,Act\n', { code: 'unknown-arm', row: 3, column: 'ARM', params: { text: 'Act' } }],
    ['an unknown actual arm', 'USUBJID,ARM,ACTARM\nB1,ACT,ACT\nB2,ACT,XX\n', { code: 'unknown-arm', row: 3, column: 'ACTARM', params: { text: 'XX' } }],
    ['a subject given twice', 'USUBJID,ARM\nB1,ACT\nB1,ACT\n', { code: 'subject-twice', row: 3, column: 'USUBJID', params: { subject: 'B1', first: 2 } }],
    ['a subject without arm', 'USUBJID,ARM\nB1,\n', { code: 'arm-missing', row: 2, column: 'ARM', params: {} }],
    ['a row without subject', 'USUBJID,ARM\n,ACT\n', { code: 'subject-missing', row: 2, column: 'USUBJID', params: {} }],
    ['a row of another width', 'USUBJID,ARM\nB1\n', { code: 'row-width', row: 2, column: null, params: { cells: 1, columns: 2 } }],
    ['no rows', 'USUBJID,ARM\n', { code: 'header-only', row: 1, column: null, params: {} }],
    ['nothing', '', { code: 'empty-file', row: null, column: null, params: {} }],
    ['a missing column', 'USUBJID,SITE\nB1,S1\n', { code: 'column-missing', row: 1, column: 'TRT01P', params: {} }],
    ['a missing subject column', 'ID,ARM\nB1,ACT\n', { code: 'column-missing', row: 1, column: 'USUBJID', params: {} }],
  ])('refuses %s', async (_, text, finding) => {
    expect(await findings(text)).toEqual([finding])
    expect((await read(text)).subjects).toEqual([])
  })
})
