import type { Content } from 'pdfmake/interfaces'
import type { MemoContent } from '../../../shared/memo/content'
import { facts, heading, paragraph, ruledTable, spaced } from '../blocks'
import { marked } from '../marks'
import { verdictWords } from '../terms'
import { dateWords, momentWords, type Say } from '../words'

function unscheduled({ unscheduledLooks }: MemoContent, say: Say): Content[] {
  if (unscheduledLooks.length === 0) return [paragraph(say('memo.unscheduled.none'))]
  return [
    paragraph(say('memo.unscheduled.some', { count: unscheduledLooks.length })),
    { ul: unscheduledLooks.map(({ extract, cutOff, receivedAt, reason }) => say('memo.unscheduled.item', {
      number: extract, cutOff: dateWords(cutOff, say), received: momentWords(receivedAt, say), reason: reason ?? say('memo.unscheduled.noReason'),
    })) },
  ]
}

/** The released verdicts of this deviation over the extracts, and the looks that no plan foresaw. */
export function courseSection(memo: MemoContent, say: Say): Content[] {
  return [
    heading(say('memo.heading.course')),
    ruledTable([132, 62, '*', 118], [say('memo.column.extract'), say('memo.column.planVersion'), say('memo.column.verdict'), say('memo.column.released')],
      memo.course.map(({ extract, planVersion, verdict, releasedAt, binding }) => [
        { stack: [say('memo.course.extract', { number: extract.number, title: extract.title }), { text: say('memo.course.cutOff', { date: dateWords(extract.cutOff, say) }), style: 'small' }] },
        String(planVersion),
        { stack: [marked(verdict.word, verdictWords(memo.analysis.registered, verdict, say)), ...(binding ? [{ text: say('memo.force.binding'), style: 'small' }] : [])] },
        momentWords(releasedAt, say),
      ])),
    spaced({ stack: unscheduled(memo, say) }, 6),
  ]
}

/** Whether the blind held, then and now, and who let the verdict through. */
export function blindingSection({ blinding, verdict }: MemoContent, say: Say): Content[] {
  const released = verdict.releasedBy === null ? say('memo.blinding.unsigned') : say('memo.blinding.releasedBy', { name: verdict.releasedBy })
  return [
    heading(say('memo.heading.blinding')),
    facts([
      [say('memo.fact.blindThen'), say(`memo.blinding.${blinding.atVerdict}`)],
      [say('memo.fact.blindNow'), say(`memo.blinding.${blinding.atSettlement}`)],
      ...(blinding.brokenAt === null ? [] : [[say('memo.fact.blindBroken'), momentWords(blinding.brokenAt, say)] as const]),
      [say('memo.fact.release'), `${momentWords(verdict.releasedAt, say)}. ${released}`],
    ]),
    paragraph(say('memo.blinding.contrast')),
  ]
}
