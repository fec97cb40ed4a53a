import type { ColumnMapping } from '../../shared/contract/extracts'
import type { Arm, Plan } from '../../shared/plan/schema'
import { columnNeeds, type ColumnNeeds } from './needs'
import { unitInText } from './units'

export type SuggestedMapping = Partial<ColumnMapping>

/** The names by which ADaM files call what Stipule needs, in order of preference. */
const ADAM = {
  parameter: ['PARAMCD'],
  visit: ['AVISIT'],
  value: ['AVAL'],
  baseline: ['BASE'],
  unit: ['AVALU', 'UNIT'],
  site: ['SITEID'],
  imputed: ['DTYPE'],
  arm: ['TRT01P', 'TRTP', 'ARMCD', 'ARM'],
} as const

type Find = (name: string) => string | null

/** Finds a column by name: as spelled, else regardless of case when only one column answers to it. */
function finder(header: readonly string[]): Find {
  return (name) => {
    const exact = header.filter(column => column === name)
    const loose = header.filter(column => column.toUpperCase() === name.toUpperCase())
    const found = exact.length > 0 ? exact : loose
    return found.length === 1 ? found[0] ?? null : null
  }
}

const firstOf = (find: Find, names: readonly string[]): string | null =>
  names.map(find).find(column => column !== null) ?? null

function findSubject(find: Find): string[] | null {
  const unique = find('USUBJID')
  if (unique !== null) return [unique]
  const subject = find('SUBJID')
  if (subject === null) return null
  const site = find('SITEID')
  return site === null ? [subject] : [site, subject]
}

const cellsOf = (header: readonly string[], rows: readonly (readonly string[])[], column: string): string[] =>
  rows.map(row => row[header.indexOf(column)] ?? '').filter(cell => cell !== '')

/** `PARAM` serves where every parameter's text ends with its unit in brackets. */
function findUnit(find: Find, header: readonly string[], rows: readonly (readonly string[])[]): string | null {
  const unit = firstOf(find, ADAM.unit)
  if (unit !== null) return unit
  const parameter = find('PARAM')
  const texts = parameter === null ? [] : cellsOf(header, rows, parameter)
  return texts.length > 0 && texts.every(text => unitInText(text) !== null) ? parameter : null
}

/** The column whose cells are arms of the plan, as most of them must be; a cell that is none is found when the file is read. */
function findArm(find: Find, header: readonly string[], rows: readonly (readonly string[])[], arms: readonly Arm[]): string | null {
  const names = new Set(arms.flatMap(({ id, label }) => [id, label]))
  const shareOf = (column: string): number => {
    const cells = cellsOf(header, rows, column)
    return cells.length === 0 ? 0 : cells.filter(cell => names.has(cell)).length / cells.length
  }
  const candidates = ADAM.arm.map(find).filter(column => column !== null).map(column => ({ column, share: shareOf(column) }))
  const best = candidates.reduce((most, each) => each.share > most.share ? each : most, { column: null as string | null, share: 0.5 })
  return best.column
}

const findFlags = (find: Find, needed: readonly string[]): Record<string, string> =>
  Object.fromEntries(needed.flatMap((name) => {
    const column = find(name)
    return column === null ? [] : [[name, column]]
  }))

/**
 * Suggests which column is what: by the mapping that this study's files had before, where they still have those
 * columns, else by ADaM names.
 *
 * @param rows the first rows of the file, to tell apart columns that only look alike by name.
 */
export function suggestMapping(plan: Plan, header: readonly string[], rows: readonly (readonly string[])[], remembered: ColumnMapping | null): SuggestedMapping {
  const find = finder(header)
  const needs = columnNeeds(plan)
  const kept = remembered === null ? {} : stillThere(remembered, find)
  const found: { [Role in keyof ColumnMapping]: ColumnMapping[Role] | null } = {
    subject: findSubject(find),
    parameter: firstOf(find, ADAM.parameter),
    visit: firstOf(find, ADAM.visit),
    value: firstOf(find, ADAM.value),
    baseline: firstOf(find, ADAM.baseline),
    unit: findUnit(find, header, rows),
    site: firstOf(find, ADAM.site),
    imputed: firstOf(find, ADAM.imputed),
    arm: needs.arm ? findArm(find, header, rows, plan.arms) : null,
    flags: { ...findFlags(find, needs.flags), ...keptFlags(kept, needs) },
  }
  return { ...onlyFound(found), ...kept, flags: found.flags ?? {} }
}

function onlyFound(found: { [Role in keyof ColumnMapping]: ColumnMapping[Role] | null }): SuggestedMapping {
  return Object.fromEntries(Object.entries(found).filter(([, column]) => column !== null))
}

function keptFlags(kept: SuggestedMapping, needs: ColumnNeeds): Record<string, string> {
  return Object.fromEntries(Object.entries(kept.flags ?? {}).filter(([name]) => needs.flags.includes(name)))
}

/** The parts of an earlier mapping whose columns this file has too. */
function stillThere(remembered: ColumnMapping, find: Find): SuggestedMapping {
  const present = (column: string) => find(column) === column
  const { subject, flags, ...single } = remembered
  return {
    ...Object.fromEntries(Object.entries(single).filter(([, column]) => column !== null && present(column))),
    ...(subject.every(present) ? { subject } : {}),
    flags: Object.fromEntries(Object.entries(flags).filter(([, column]) => present(column))),
  }
}

/** Whether a suggestion leaves nothing for a person to decide, and the mapping that it makes. */
export function completeMapping(plan: Plan, suggested: SuggestedMapping): ColumnMapping | null {
  const { subject, value, flags = {}, parameter = null, visit = null, baseline = null, unit = null, arm = null } = suggested
  if (subject === undefined || value === undefined || undecidedRoles(plan, suggested).length > 0) return null
  return {
    subject, value, parameter, visit, baseline, unit, arm, flags,
    site: suggested.site ?? null, imputed: suggested.imputed ?? null,
  }
}

/** What a person has to decide, by the names that ADaM files have for it: all that is missing, and the unit. */
export const undecidedRoles = (plan: Plan, suggested: SuggestedMapping): string[] =>
  [...missingRoles(plan, suggested), ...suggested.unit ? [] : ['AVALU']]

/** What a mapping still lacks of that without which nothing can be judged, by the names that ADaM files have for it. */
function missingRoles(plan: Plan, { subject, value, parameter, visit, baseline, arm, flags = {} }: SuggestedMapping): string[] {
  const needs = columnNeeds(plan)
  const missing = [
    ...(subject ? [] : ['USUBJID']),
    ...(needs.parameter && !parameter ? ['PARAMCD'] : []),
    ...(needs.visit && !visit ? ['AVISIT'] : []),
    ...(value ? [] : ['AVAL']),
    ...(needs.baseline && !baseline ? ['BASE'] : []),
    ...(needs.arm && !arm ? ['TRT01P'] : []),
  ]
  return [...missing, ...needs.flags.filter(name => flags[name] === undefined)]
}

const ADAM_CORE = ['USUBJID', 'PARAMCD', 'AVISIT', 'AVAL']

export interface HeaderFault { readonly code: 'column-missing' | 'column-repeated', readonly column: string }

/**
 * What is wrong with a header whose file plainly follows ADaM (three of its four core names are there): columns
 * that are there twice or missing. A file in other words is no fault: a person maps it.
 */
export function headerFaults(plan: Plan, header: readonly string[], suggested: SuggestedMapping): HeaderFault[] {
  const upper = header.map(name => name.toUpperCase())
  if (ADAM_CORE.filter(name => upper.includes(name)).length < 3) return []
  const times = (name: string) => header.filter(column => column === name).length
  return missingRoles(plan, suggested)
    .filter(name => name !== 'TRT01P') // which arm column counts is asked for
    .map(name => times(name) > 1
      ? { code: 'column-repeated', column: name }
      : { code: 'column-missing', column: name })
}

export interface MappingFault { readonly pointer: string, readonly code: 'required' | 'column-unknown' | 'column-repeated' | 'column-twice' | 'not-allowed' }

/** What is wrong with a mapping that a person gave; empty when it can be used. */
export function mappingFaults(plan: Plan, header: readonly string[], mapping: ColumnMapping): MappingFault[] {
  const needs = columnNeeds(plan)
  const named: [pointer: string, column: string | null, needed: boolean][] = [
    ...mapping.subject.map((column, at): [string, string, boolean] => [`/subject/${at}`, column, true]),
    ['/parameter', mapping.parameter, needs.parameter], ['/visit', mapping.visit, needs.visit], ['/value', mapping.value, true],
    ['/baseline', mapping.baseline, needs.baseline], ['/unit', mapping.unit, false], ['/site', mapping.site, false],
    ['/imputed', mapping.imputed, false], ['/arm', mapping.arm, needs.arm],
    ...needs.flags.map((name): [string, string | null, boolean] => [`/flags/${name}`, mapping.flags[name] ?? null, true]),
  ]
  const faults = named.flatMap(([pointer, column, needed]): MappingFault[] => {
    if (column === null) return needed ? [{ pointer, code: 'required' }] : []
    const times = header.filter(name => name === column).length
    return times === 1 ? [] : [{ pointer, code: times === 0 ? 'column-unknown' : 'column-repeated' }]
  })
  const unknownFlags = Object.keys(mapping.flags).filter(name => !needs.flags.includes(name))
  return [
    ...faults,
    ...(new Set(mapping.subject).size < mapping.subject.length ? [{ pointer: '/subject/1', code: 'column-twice' } as const] : []),
    ...(mapping.arm !== null && !needs.arm ? [{ pointer: '/arm', code: 'not-allowed' } as const] : []),
    ...unknownFlags.map(name => ({ pointer: `/flags/${name}`, code: 'not-allowed' } as const)),
  ]
}
