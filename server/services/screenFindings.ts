import type { ColumnMapping, Finding } from '../../shared/contract/extracts'
import type { ScreenFinding } from '../../shared/decision/screen'
import { FINDINGS_KEPT, type FindingSummary } from '../readers/findings'

interface Found {
  readonly mapping: ColumnMapping | null
  readonly findings: readonly Finding[]
  readonly findingCounts: FindingSummary['counts']
}

/** The column of the file in which a screen looks. */
function columnOf({ kind }: ScreenFinding, mapping: ColumnMapping | null): string | null {
  if (mapping === null) return null
  switch (kind) {
    case 'wrong-unit': return mapping.unit
    case 'unknown-visit': return mapping.visit
    case 'duplicate-key': return mapping.subject[0] ?? null
    case 'impossible-value':
    case 'implausible-value': return mapping.value
  }
}

const asFindings = (screen: ScreenFinding, mapping: ColumnMapping | null): Finding[] => screen.rows.map(row => ({
  severity: screen.action, code: screen.kind, row, column: columnOf(screen, mapping), params: { endpoint: screen.endpoint },
}))

const WEIGHT = { refuse: 0, hold: 1, warn: 2 } as const

/** Findings of the reader together with those of the screens: what weighs most first, then by row. */
export function mergeScreens({ mapping, findings, findingCounts }: Found, screens: readonly ScreenFinding[]) {
  const counts = { ...findingCounts }
  for (const { action, count } of screens) counts[action] += count
  const all = [...findings, ...screens.flatMap(screen => asFindings(screen, mapping))]
    .sort((a, b) => WEIGHT[a.severity] - WEIGHT[b.severity] || (a.row ?? 0) - (b.row ?? 0))
  return { findings: all.slice(0, FINDINGS_KEPT), findingCounts: counts }
}
