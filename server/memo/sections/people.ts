import type { Content } from 'pdfmake/interfaces'
import type { MemoContent } from '../../../shared/memo/content'
import { facts, heading, paragraph, signatureRows, spaced } from '../blocks'
import { momentWords, type Say } from '../words'

/** That the investigator was told, and what came back: informed, declined, awaited or outstanding. */
export function informedSection({ acknowledgement }: MemoContent, say: Say): Content[] {
  const { state, dueAt, asked, comment, signature } = acknowledgement
  return [
    heading(say('memo.heading.informed')),
    facts([
      [say('memo.fact.asked'), asked.length === 0 ? say('memo.acknowledgement.nobody') : asked.join(', ')],
      [say('memo.fact.due'), momentWords(dueAt, say)],
      [say('memo.fact.answer'), { text: say(`deviation.acknowledgement.${state}`), bold: true }],
      ...(comment === null ? [] : [[say('memo.fact.comment'), comment] as const]),
    ]),
    paragraph(say('memo.acknowledgement.meaning')),
    ...(signature === null ? [] : [spaced(signatureRows([signature], say), 5)]),
  ]
}

/** What was decided about it, why, and by whom. */
export function settlementSection({ settlement }: MemoContent, say: Say): Content[] {
  const { kind, note, signature, second } = settlement
  return [
    heading(say('memo.heading.settlement')),
    facts([
      [say('memo.fact.settlement'), { text: say(`deviation.settlements.${kind}`), bold: true }],
      [say('memo.fact.note'), note],
    ]),
    paragraph(say(`memo.settlement.${kind}`)),
    spaced(signatureRows(second === null ? [signature] : [signature, second], say), 5),
  ]
}
