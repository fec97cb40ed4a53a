import { describe, expect, it } from 'vitest'
import { findTreatmentColumn, looksLikeTreatment } from '../../../../server/readers/treatment'

const arms = [{ id: 'HIGH', label: 'Vellorane 40 mg', ratio: 1 }, { id: 'LOW', label: 'Vellorane 15 mg', ratio: 1 }, { id: 'PBO', label: 'Placebo', ratio: 1 }]

describe('looksLikeTreatment', () => {
  it.each([
    'TRTP', 'TRTPN', 'TRT01P', 'TRT01PN', 'TRTA', 'TRTAN', 'TRT01A', 'TRT01AN', 'TRT12A', 'ARM', 'ARMCD', 'ACTARM', 'ACTARMCD', 'ACTARMUD',
    'TRTSEQP', 'TRTSEQPN', 'TRTSEQA', 'TRTSEQAN', 'TRTPG1', 'TRTAG1N', 'TR01PG1', 'TR02AG1N', 'TSEQPG1', 'DOSE01P', 'DOSEP', 'DOSE01A', 'EXTRT', 'EXDOSE',
    'trtp', ' Trt01p ', 'trt_01_p', 'Arm', 'Treatment', 'treatment arm', 'TREATMENT_GROUP', 'Randomised Treatment', 'randomized_arm', 'Planned Treatment',
    'group', 'Study Group', 'Allocation', 'ＡＲＭ', 'trt', 'drug', 'treat',
  ])('recognises %j', (header) => {
    expect(looksLikeTreatment(header)).toBe(true)
  })

  it.each([
    'TRTSDT', 'TRTEDT', 'TRTSDTM', 'TRTEDTM', 'TRTDURD', 'TRTEMFL', 'TRTFL', 'ARMNRS', 'USUBJID', 'PARAMCD', 'AVISIT', 'AVAL', 'BASE', 'SITEID', 'FASFL', 'AGEGR1',
    'AGEGROUP', 'ALARM', 'ALBTRVAL', 'DTYPE', 'RANDDT', 'CMTRT', 'FOREARM', 'APERIOD', 'PHARMACY', '',
  ])('leaves %j alone', (header) => {
    expect(looksLikeTreatment(header)).toBe(false)
  })
})

describe('findTreatmentColumn', () => {
  it('names the first such column', () => {
    expect(findTreatmentColumn(['USUBJID', 'TRTSDT', 'TRTA', 'ARM'], [], arms)).toBe('TRTA')
    expect(findTreatmentColumn(['USUBJID', 'AVAL'], [['1', '2']], arms)).toBeNull()
  })

  it('finds arms under an innocent name, by code or label, whatever the case', () => {
    expect(findTreatmentColumn(['USUBJID', 'X1'], [['1', 'high'], ['2', ''], ['3', 'PBO ']], arms)).toBe('X1')
    expect(findTreatmentColumn(['X1', 'AVAL'], [['Placebo', '1'], ['vellorane 15 MG', '3']], arms)).toBe('X1')
  })

  it('does not take a column for treatment that holds other words too, one arm only, or codes of one letter', () => {
    expect(findTreatmentColumn(['FLAG'], [['HIGH'], ['LOW'], ['NORMAL']], arms)).toBeNull()
    expect(findTreatmentColumn(['FLAG'], [['HIGH'], ['HIGH']], arms)).toBeNull()
    expect(findTreatmentColumn(['SEX'], [['F'], ['M']], [{ id: 'F', label: 'Forte', ratio: 1 }, { id: 'M', label: 'Mite', ratio: 1 }])).toBeNull()
  })
})
