import { lookWindow } from './calendar'
import { issueIf, type PlanIssue } from './issues'
import type { Plan } from './schema'
import { SCREEN_KINDS, STANDING_SCREENS } from './terms'

const spelling = (text: string) => text.normalize('NFKC').replaceAll(/\s+/gu, ' ').trim().toLowerCase()

/** Two arms whose id or label differ only in case, blanks or width could not be told apart in a list. */
function armIssues({ arms, blinding }: Plan): PlanIssue[] {
  const owners = new Map<string, number>()
  const alike = arms.flatMap(({ id, label }, index) => [['id', id], ['label', label]].flatMap(([field = '', text = '']) => {
    const key = spelling(text)
    const owner = owners.get(key) ?? index
    owners.set(key, owner)
    return issueIf(owner !== index, ['arms', index, field], 'arms-alike', { other: arms[owner]?.id ?? '' })
  }))
  return [...alike, ...issueIf(blinding === 'blinded' && arms.length < 2, ['blinding'], 'blinded-needs-two-arms')]
}

/** Looks follow one another, their windows keep apart, and the expected number of subjects never falls. */
function lookIssues({ looks, decisionPoint }: Plan): PlanIssue[] {
  const pairs = looks.slice(1).flatMap((look, index) => {
    const before = looks[index]
    if (before === undefined) return []
    const path = ['looks', index + 1]
    const ordered = look.cutOff > before.cutOff
    const apart = lookWindow(before).last < lookWindow(look).first
    return [
      ...issueIf(!ordered, [...path, 'cutOff'], 'looks-not-ordered', { other: before.id }),
      ...issueIf(ordered && !apart, [...path, 'daysBefore'], 'looks-overlap', { other: before.id }),
      ...issueIf(look.expectedSubjects < before.expectedSubjects, [...path, 'expectedSubjects'], 'expected-decreases'),
    ]
  })
  const last = looks[looks.length - 1]
  const falls = last !== undefined && decisionPoint.expectedSubjects < last.expectedSubjects
  return [...pairs, ...issueIf(falls, ['decisionPoint', 'expectedSubjects'], 'expected-decreases')]
}

function rangeIssues({ endpoints }: Plan): PlanIssue[] {
  return endpoints.flatMap(({ possible, plausible }, index) => {
    const path = ['endpoints', index, 'plausible']
    const low = possible.min !== null && plausible.min !== null && plausible.min < possible.min
    const high = possible.max !== null && plausible.max !== null && plausible.max > possible.max
    return [...issueIf(low, [...path, 'min'], 'plausible-outside-possible'), ...issueIf(high, [...path, 'max'], 'plausible-outside-possible')]
  })
}

/** Ids under which a screen acts that the plan does not list; see `effectiveScreens`. */
const RESERVED: readonly string[] = [...SCREEN_KINDS, ...STANDING_SCREENS]

function screenIssues({ screens }: Plan): PlanIssue[] {
  return screens.flatMap(({ id, kind, action }, index) => [
    ...issueIf(screens.findIndex(other => other.kind === kind) < index, ['screens', index, 'kind'], 'screen-repeated'),
    ...issueIf(kind === 'duplicate-key' && action !== 'hold', ['screens', index, 'action'], 'duplicate-key-must-hold'),
    ...issueIf(id !== kind && RESERVED.includes(id), ['screens', index, 'id'], 'screen-id-reserved'),
  ])
}

/** What is wrong outside the planned analyses: arms, looks, ranges, screens. */
export function studyConsistency(plan: Plan): PlanIssue[] {
  return [...armIssues(plan), ...rangeIssues(plan), ...lookIssues(plan), ...screenIssues(plan)]
}
