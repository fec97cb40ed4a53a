import type { ScreenReport, SeenAnalysis, SeenPrerequisite, SeenReport } from '../../shared/decision/report'
import { describeStep } from '../../shared/plan/describe'
import { wordPhrase } from '../../shared/plan/phrase'
import type { Plan } from '../../shared/plan/schema'
import { say } from '../../shared/wording/say'
import { figureLines } from './checkFigures'

const ROWS_NAMED = 10

function stepName(plan: Plan, analysis: string, step: string | null): string | null {
  const registered = plan.analyses.find(({ id }) => id === analysis)
  const taken = registered?.fallbacks.find(({ id }) => id === step)
  return registered && taken ? wordPhrase(describeStep(registered, taken), (key, params) => say('en', key, params)) : null
}

function verdictWords(plan: Plan, { analysis, verdict: { word, step, reason, setAside, changesQuestion } }: SeenAnalysis): string {
  const parts = [say('en', `verdict.word.${word}`), stepName(plan, analysis, step), reason === null ? null : say('en', `verdict.reason.${reason}`)]
  const beside = [
    changesQuestion ? say('en', 'plan.changesQuestion') : null,
    setAside === null ? null : say('en', 'plan.check.setAside', { reason: say('en', `verdict.reason.${setAside}`) }),
  ]
  return [parts.filter(part => part !== null).join(': '), ...beside.filter(part => part !== null)].join('; ')
}

const padded = (rows: readonly (readonly string[])[]): string[] => {
  const widths = rows[0]?.map((_, column) => Math.max(...rows.map(row => row[column]?.length ?? 0))) ?? []
  return rows.map(row => row.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  ').trimEnd())
}

function prerequisiteRows(prerequisite: SeenPrerequisite): string[][] {
  const { prerequisite: id, kind, verdict, reason } = prerequisite
  const word = say('en', `verdict.prerequisite.${verdict}`)
  const lines = figureLines(prerequisite)
  const head = [id, say('en', `plan.kinds.${kind}`), reason === null ? word : `${word}: ${say('en', `verdict.reason.${reason}`)}`, lines[0] ?? '']
  return [head, ...lines.slice(1).map(line => ['', '', '', line])]
}

const labelOf = (plan: Plan, { analysis }: SeenAnalysis): string => plan.analyses.find(({ id }) => id === analysis)?.label ?? analysis

/** One analysis with its prerequisites, and those of every step that the walk reached. */
function section(plan: Plan, seen: SeenAnalysis): string[] {
  const steps = seen.steps.filter(step => step.prerequisites.length > 0)
  const blocks = [seen.prerequisites.flatMap(prerequisiteRows), ...steps.map(step => step.prerequisites.flatMap(prerequisiteRows))]
  const lines = padded(blocks.flat())
  const heads = ['', ...steps.map(step => `  ${say('en', 'plan.check.step', { step: stepName(plan, seen.analysis, step.step) ?? step.step, outcome: say('en', `plan.outcomes.${step.outcome}`) })}`)]
  const body = blocks.flatMap((rows, index) => {
    const from = blocks.slice(0, index).flat().length
    return [...index === 0 ? [] : [heads[index] ?? ''], ...lines.slice(from, from + rows.length).map(line => `  ${line}`)]
  })
  return ['', labelOf(plan, seen), ...body]
}

function screenLine({ kind, endpoint, action, rows, count }: ScreenReport): string {
  const named = rows.slice(0, ROWS_NAMED).join(', ')
  const list = count > ROWS_NAMED ? say('en', 'plan.check.moreRows', { rows: named, more: count - ROWS_NAMED }) : named
  return say('en', 'plan.check.screen', { kind: say('en', `plan.screens.${kind}`), endpoint, action: say('en', `plan.screenActions.${action}`), rows: list })
}

function source({ plan, extract, engine }: SeenReport): string {
  return say('en', 'plan.check.source', { version: plan.protocol.version, plan: plan.hash, rows: extract.rows, extract: extract.bytesHash, engine })
}

/** The report for a terminal: a table of verdicts, then each analysis with its figures, and what the report is not. */
export function reportText(plan: Plan, report: SeenReport): string {
  const head = ['analysis', 'method', 'verdict'].map(name => say('en', `plan.check.${name}`))
  const rows = report.analyses.map(seen => [labelOf(plan, seen), say('en', `plan.methods.${seen.method}`), verdictWords(plan, seen)])
  return [
    `${plan.protocol.number}, ${plan.protocol.title}`, source(report), '',
    ...padded([head, ...rows]),
    ...report.screens.length === 0 ? [] : ['', ...report.screens.map(screenLine)],
    ...report.analyses.flatMap(seen => section(plan, seen)), '',
    say('en', 'extract.commandLine.outside'), `${say('en', 'base.cautionLead')} ${say('en', 'base.caution')}`, '',
  ].join('\n')
}
