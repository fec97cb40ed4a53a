import { describe, expect, it } from 'vitest'
import type { ColumnMapping } from '#shared/contract/extracts'
import { completeMapping, headerFaults, mappingFaults, suggestMapping, undecidedRoles } from '../../../../server/readers/mapping'
import { plainReaderPlan, readerPlan } from '../../../helpers/readerPlan'

const adam = ['STUDYID', 'USUBJID', 'SITEID', 'PARAMCD', 'AVISIT', 'AVAL', 'BASE', 'AVALU', 'DTYPE', 'FASFL', 'ANL01FL']
const whole: ColumnMapping = {
  subject: ['USUBJID'], parameter: 'PARAMCD', visit: 'AVISIT', value: 'AVAL', baseline: 'BASE', unit: 'AVALU', site: 'SITEID', imputed: 'DTYPE',
  arm: null, flags: { FASFL: 'FASFL', ANL01FL: 'ANL01FL' },
}
const suggestedFor = (header: string[], rows: string[][] = [], plan = readerPlan()) => suggestMapping(plan, header, rows, null)

describe('suggestMapping and completeMapping', () => {
  it('recognise ADaM names, whatever their case and order', () => {
    expect(completeMapping(readerPlan(), suggestedFor(adam))).toEqual(whole)
    const lower = completeMapping(readerPlan(), suggestedFor(adam.map(name => name.toLowerCase()).reverse()))
    expect(lower).toMatchObject({ subject: ['usubjid'], value: 'aval', flags: { FASFL: 'fasfl', ANL01FL: 'anl01fl' } })
  })

  it('prefer the name as spelled and leave two that differ only in case to a person', () => {
    expect(suggestedFor(['AVAL', 'aval', 'USUBJID']).value).toBe('AVAL')
    expect(suggestedFor(['Aval', 'aval', 'USUBJID']).value).toBeUndefined()
  })

  it('take site and subject together where there is no unique subject id', () => {
    expect(suggestedFor(['SUBJID', 'SITEID']).subject).toEqual(['SITEID', 'SUBJID'])
    expect(suggestedFor(['SUBJID']).subject).toEqual(['SUBJID'])
  })

  it('do without parameter, visit, baseline and flags only where the plan can', () => {
    const plan = plainReaderPlan()
    const small = suggestedFor(['USUBJID', 'AVAL', 'AVALU', 'FASFL'], [], plan)
    expect(completeMapping(plan, small)).toMatchObject({ parameter: null, visit: null, baseline: null, flags: { FASFL: 'FASFL' } })
    expect(undecidedRoles(readerPlan(), small)).toEqual(['PARAMCD', 'AVISIT', 'BASE', 'ANL01FL'])
  })

  it('ask a person when no column states the unit, and read it from PARAM where every text ends with it', () => {
    const header = adam.map(name => name === 'AVALU' ? 'PARAM' : name)
    const row = (text: string) => header.map(name => name === 'PARAM' ? text : 'x')
    expect(completeMapping(readerPlan(), suggestedFor(header, [row('Pain score')]))).toBeNull()
    expect(undecidedRoles(readerPlan(), suggestedFor(header, [row('Pain score')]))).toEqual(['AVALU'])
    expect(completeMapping(readerPlan(), suggestedFor(header, [row('Pain score (mm)'), row('CRP (µg/mL)')]))).toMatchObject({ unit: 'PARAM' })
  })

  it('suggest an arm only for an open-label plan, and only a column that holds its arms', () => {
    const header = [...adam, 'TRTP', 'ARMCD']
    const row = (trtp: string, armcd: string) => header.map(name => name === 'TRTP' ? trtp : name === 'ARMCD' ? armcd : '')
    const open = readerPlan({ blinding: 'open-label' })
    expect(suggestedFor(header, [row('Drug', 'ACT')]).arm).toBeUndefined()
    expect(suggestedFor(header, [row('Drug', 'ACT')], open).arm).toBe('ARMCD')
    expect(suggestedFor(header, [row('Placebo', 'ACT')], open).arm).toBe('TRTP')
    expect(completeMapping(open, suggestedFor(header, [row('Drug', 'A')], open))).toBeNull()
  })

  it('follow the mapping that the study had before, as far as its columns are still there', () => {
    const remembered = { ...whole, subject: ['PATIENT'], value: 'RESULT', visit: 'WEEK', flags: { FASFL: 'ITT', ANL01FL: 'ANL01FL' } }
    const header = ['PATIENT', 'PARAMCD', 'AVISIT', 'RESULT', 'BASE', 'AVALU', 'ITT', 'ANL01FL', 'AVAL']
    expect(completeMapping(readerPlan(), suggestMapping(readerPlan(), header, [], remembered)))
      .toMatchObject({ subject: ['PATIENT'], value: 'RESULT', visit: 'AVISIT', flags: { FASFL: 'ITT', ANL01FL: 'ANL01FL' } })
  })
})

describe('headerFaults', () => {
  const faults = (header: string[], plan = readerPlan()) => headerFaults(plan, header, suggestedFor(header, [], plan))
  const without = (name: string) => adam.filter(column => column !== name)

  it.each(['AVAL', 'USUBJID', 'PARAMCD', 'AVISIT', 'BASE', 'FASFL', 'ANL01FL'])('names %s when an ADaM file lacks it', (name) => {
    expect(faults(without(name))).toEqual([{ code: 'column-missing', column: name }])
  })

  it('names a column that is there twice', () => {
    expect(faults([...adam, 'AVAL'])).toEqual([{ code: 'column-repeated', column: 'AVAL' }])
  })

  it('says nothing about columns that nobody needs, or about a file in other words', () => {
    expect(faults([...without('SITEID'), 'STUDYID'])).toEqual([])
    expect(faults(['patient', 'test', 'week', 'result'])).toEqual([])
  })
})

describe('mappingFaults', () => {
  const faults = (changes: Partial<ColumnMapping>) => mappingFaults(readerPlan(), [...adam, 'SEX', 'SEX'], { ...whole, ...changes })

  it('accepts a mapping that the file and the plan carry', () => {
    expect(faults({})).toEqual([])
    expect(faults({ unit: null, site: null, imputed: null })).toEqual([])
  })

  it('points at what is wrong', () => {
    expect(faults({ value: 'RESULT' })).toEqual([{ pointer: '/value', code: 'column-unknown' }])
    expect(faults({ site: 'SEX' })).toEqual([{ pointer: '/site', code: 'column-repeated' }])
    expect(faults({ visit: null })).toEqual([{ pointer: '/visit', code: 'required' }])
    expect(faults({ subject: ['USUBJID', 'USUBJID'] })).toEqual([{ pointer: '/subject/1', code: 'column-twice' }])
    expect(faults({ flags: { FASFL: 'FASFL' } })).toEqual([{ pointer: '/flags/ANL01FL', code: 'required' }])
    expect(faults({ flags: { ...whole.flags, SAFFL: 'FASFL' } })).toEqual([{ pointer: '/flags/SAFFL', code: 'not-allowed' }])
  })

  it('takes no arm from the extract of a blinded study', () => {
    expect(faults({ arm: 'STUDYID' })).toEqual([{ pointer: '/arm', code: 'not-allowed' }])
  })
})
