import type { Content, TableCell } from 'pdfmake/interfaces'
import type { Figure, SeenPrerequisite } from '../../../shared/decision/report'
import type { MemoContent } from '../../../shared/memo/content'
import { heading, paragraph, ruledTable } from '../blocks'
import { figureWords } from '../figureWords'
import { marked } from '../marks'
import { plain } from '../styles'
import { reasonWords } from '../terms'
import { count, measured, registered, type Say } from '../words'

/** Where a figure was taken, how many values it rests on, and what it was held against. */
interface Line { readonly sample: string, readonly n: string, readonly figure: string, readonly limit: string }

function limitWords({ limit, pValue: p, measure }: Figure, say: Say): string {
  if (limit === null) return say('memo.figures.reported')
  if (p !== null) return say('memo.figures.level', { level: registered(limit) })
  return measure === 'share-missing' ? measured(measure, limit) : registered(limit)
}

const lineOf = (figure: Figure, sample: string, n: string, say: Say): Line => ({ sample, n, figure: figureWords(figure, say), limit: limitWords(figure, say) })

function linesOf(prerequisite: SeenPrerequisite, armLabel: (arm: string | null) => string, say: Say): Line[] {
  const inSamples = prerequisite.samples.flatMap(({ arm, n, figures }) =>
    figures.map((figure, index) => lineOf(figure, index === 0 ? armLabel(arm) : '', index === 0 ? count(n) : '', say)))
  return [...inSamples, ...prerequisite.figures.map((figure, index) => lineOf(figure, index === 0 ? say('memo.figures.inAll') : '', '', say))]
}

const WIDTHS = [58, 22, '*', 52]

const innerTable = (lines: readonly Line[]): TableCell => ({
  table: {
    widths: WIDTHS,
    body: lines.map(({ sample, n, figure, limit }) => [sample, { text: n, alignment: 'right' }, figure, { text: limit, alignment: 'right' }]),
  },
  layout: { ...plain, paddingTop: () => 0, paddingBottom: () => 0.8 },
})

function nameCell(prerequisite: SeenPrerequisite, say: Say): TableCell {
  const quantity = prerequisite.quantity === null ? [] : [{ text: say(`plan.quantities.${prerequisite.quantity}`), style: 'small' }]
  return { stack: [say(`plan.kinds.${prerequisite.kind}`), ...quantity, { text: say(`memo.consequence.${prerequisite.consequence}`), style: 'small' }] }
}

function verdictCell({ verdict, reason }: SeenPrerequisite, say: Say): TableCell {
  const words = marked(verdict, say(`verdict.prerequisite.${verdict}`))
  return reason === null ? { stack: [words] } : { stack: [words, { text: reasonWords(reason, say), style: 'small' }] }
}

const withheld = (prerequisite: SeenPrerequisite, say: Say): TableCell =>
  ({ text: say(prerequisite.dependsOnArms ? 'memo.figures.withheld' : 'memo.figures.none'), style: 'soft' })

/** The table of one list of prerequisites, with every figure that this edition may carry. */
export function prerequisiteTable(prerequisites: readonly SeenPrerequisite[], memo: MemoContent, say: Say): Content {
  const labels = new Map(memo.analysis.arms.map(arm => [arm.id, arm.label]))
  const armLabel = (arm: string | null) => arm === null ? '' : labels.get(arm) ?? arm
  const head: TableCell = {
    table: { widths: WIDTHS, body: [[
      { text: say('memo.column.sample'), style: 'head' }, { text: say('memo.column.n'), style: 'head', alignment: 'right' },
      { text: say('memo.column.figure'), style: 'head' }, { text: say('memo.column.limit'), style: 'head', alignment: 'right' },
    ]] },
    layout: { ...plain, paddingTop: () => 0, paddingBottom: () => 0 },
  }
  return ruledTable([102, '*', 82], [say('memo.column.prerequisite'), head, say('memo.column.verdict')], prerequisites.map((prerequisite) => {
    const lines = linesOf(prerequisite, armLabel, say)
    return [nameCell(prerequisite, say), lines.length > 0 ? innerTable(lines) : withheld(prerequisite, say), verdictCell(prerequisite, say)]
  }))
}

/** The prerequisites of the planned method, each with quantity, n, figure, limit and verdict. */
export function findingsSection(memo: MemoContent, say: Say): Content[] {
  const held = memo.judged.prerequisites.some(({ dependsOnArms }) => dependsOnArms) && memo.edition === 'blinded'
  return [
    heading(say('memo.heading.findings')),
    paragraph(say('memo.findings.method', { method: say(`plan.methods.${memo.judged.method}`) })),
    prerequisiteTable(memo.judged.prerequisites, memo, say),
    { text: say('memo.findings.meaning'), style: 'small', margin: [0, 5, 0, 0] },
    ...(held ? [{ text: say('memo.findings.blinded'), style: 'small', margin: [0, 3, 0, 0] } satisfies Content] : []),
  ]
}
