import type { Content } from 'pdfmake/interfaces'
import { describeTrigger } from '../../../shared/plan/describe'
import { wordPhrase } from '../../../shared/plan/phrase'
import type { SeenStep } from '../../../shared/decision/report'
import type { MemoContent } from '../../../shared/memo/content'
import { heading, paragraph } from '../blocks'
import { INK } from '../styles'
import { reasonWords, stepHead } from '../terms'
import type { Say } from '../words'
import { prerequisiteTable } from './findings'

/** Why a step applies or does not, in one sentence. */
function outcomeWords({ outcome, reason, step }: SeenStep, { analysis: { registered } }: MemoContent, say: Say): string {
  const fallback = registered.fallbacks.find(({ id }) => id === step)
  const trigger = fallback ? wordPhrase(describeTrigger(fallback.trigger), say) : ''
  const said = say(`memo.outcome.${outcome}`, { trigger })
  return reason === null ? said : `${said} ${say('memo.outcome.reason', { reason: reasonWords(reason, say) })}`
}

const WEIGHTY = new Set<SeenStep['outcome']>(['applies', 'prerequisite-not-met', 'not-assessable'])

function stepBlock(step: SeenStep, memo: MemoContent, say: Say): Content[] {
  const applies = step.outcome === 'applies'
  const change = step.changesQuestion ? [{ text: say('memo.step.changesQuestion'), color: INK.madder, bold: true }] : []
  return [
    {
      unbreakable: true,
      margin: [0, 5, 0, 2],
      stack: [
        { text: [{ text: stepHead(memo.analysis.registered, step.step, say), bold: true, ...(applies ? { color: INK.ochre } : {}) }, `: ${outcomeWords(step, memo, say)}`] },
        { text: [say('memo.step.measure', { measure: say(`plan.measures.${step.summaryMeasure}`) }), ' ', ...change], style: 'small' },
      ],
    },
    ...(WEIGHTY.has(step.outcome) && step.prerequisites.length > 0 ? [prerequisiteTable(step.prerequisites, memo, say)] : []),
  ]
}

/** What the analysis estimates after the walk, and whether that is what was planned. */
function questionWords({ verdict, analysis: { registered } }: MemoContent, say: Say): string {
  if (verdict.word === 'no-registered-method') return say('memo.order.exhausted')
  return say(verdict.changesQuestion ? 'memo.order.changed' : 'memo.order.kept', { planned: say(`plan.measures.${registered.summaryMeasure}`) })
}

/** The registered order walked: which step applies, and why each earlier one does not. */
export function orderSection(memo: MemoContent, say: Say): Content[] {
  const { judged, verdict } = memo
  const setAside = verdict.setAside === null
    ? []
    : [paragraph(say('memo.order.setAside', { reason: reasonWords(verdict.setAside, say) }))]
  return [
    heading(say('memo.heading.order')),
    ...(judged.steps.length === 0 ? [paragraph(say('memo.order.noSteps'))] : judged.steps.flatMap(step => stepBlock(step, memo, say))),
    ...setAside,
    paragraph(questionWords(memo, say)),
  ]
}
