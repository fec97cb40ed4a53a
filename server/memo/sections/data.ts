import type { Content } from 'pdfmake/interfaces'
import type { MemoContent } from '../../../shared/memo/content'
import { facts, hashText, heading, paragraph } from '../blocks'
import { count, dateWords, momentWords, type Say } from '../words'

function selectionWords({ judged: { selection } }: MemoContent, say: Say): string {
  const dropped = selection.dropped.filter(({ count: n }) => n > 0)
    .map(({ reason, count: n }) => say(`memo.dropped.${reason}`, { count: count(n) }))
  return [
    say('memo.selection.kept', { kept: count(selection.kept), rows: count(selection.rows) }),
    ...(dropped.length > 0 ? [say('memo.selection.dropped', { list: dropped.join(', ') })] : []),
    ...(selection.imputed > 0 ? [say('memo.selection.imputed', { count: count(selection.imputed) })] : []),
  ].join(' ')
}

/** Which file was judged, how it can be recognised, and which of its rows entered. */
export function dataSection(memo: MemoContent, say: Say): Content[] {
  const { extract, judged: { selection } } = memo
  return [
    heading(say('memo.heading.data')),
    facts([
      [say('memo.fact.extract'), say('memo.fact.extractStanding', { number: extract.number, title: extract.title, standing: say(`plan.standings.${extract.standing}`) })],
      [say('memo.fact.cutOff'), dateWords(extract.cutOff, say)],
      [say('memo.fact.received'), say('memo.fact.receivedBy', { moment: momentWords(extract.receivedAt, say), name: extract.uploadedBy })],
      [say('memo.fact.rows'), extract.subjects === null
        ? count(extract.rows)
        : say('memo.fact.rowsSubjects', { rows: count(extract.rows), subjects: count(extract.subjects) })],
      [say('memo.fact.contentHash'), hashText(extract.contentHash)],
      [say('memo.fact.usable'), say('memo.fact.usableOf', { usable: count(selection.usable), expected: count(selection.expected) })],
    ]),
    paragraph(selectionWords(memo, say)),
  ]
}
