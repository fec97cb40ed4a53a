import type { SeenAnalysis, SeenReport } from '../../shared/decision/report'
import { describeStep } from '../../shared/plan/describe'
import { wordPhrase } from '../../shared/plan/phrase'
import type { Plan } from '../../shared/plan/schema'
import { say } from '../../shared/wording/say'

function verdictWords(plan: Plan, { analysis, verdict: { word, step, reason } }: SeenAnalysis): string {
  const registered = plan.analyses.find(({ id }) => id === analysis)
  const taken = registered?.fallbacks.find(({ id }) => id === step)
  const name = registered && taken ? wordPhrase(describeStep(registered, taken), (key, params) => say('en', key, params)) : null
  const parts = [say('en', `verdict.word.${word}`), name, reason === null ? null : say('en', `verdict.reason.${reason}`)]
  return parts.filter(part => part !== null).join(': ')
}

const padded = (rows: readonly (readonly string[])[]): string[] => {
  const widths = rows[0]?.map((_, column) => Math.max(...rows.map(row => row[column]?.length ?? 0))) ?? []
  return rows.map(row => row.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  ').trimEnd())
}

/** The report as a table for a terminal, with what it is not. */
export function reportText(plan: Plan, report: SeenReport): string {
  const rows = report.analyses.map((seen) => {
    const registered = plan.analyses.find(({ id }) => id === seen.analysis)
    return [registered?.label ?? seen.analysis, say('en', `plan.methods.${seen.method}`), verdictWords(plan, seen)]
  })
  return [
    `${plan.protocol.number}, ${plan.protocol.title}`, '', ...padded(rows), '',
    say('en', 'extract.commandLine.outside'), `${say('en', 'base.cautionLead')} ${say('en', 'base.caution')}`, '',
  ].join('\n')
}
