import type { Content } from 'pdfmake/interfaces'
import type { MemoContent, MemoStep } from '../../../shared/memo/content'
import { facts, hashText, heading, paragraph, signatureRows, spaced, subheading } from '../blocks'
import { INK } from '../styles'
import { dateWords, momentWords, type Say } from '../words'

function declarationWords({ declaration }: MemoContent['plan'], say: Say): Content {
  if (declaration === null) return say('memo.declaration.none')
  const { firstSubjectIn, dataSeen } = declaration
  const subject = firstSubjectIn === null ? say('memo.declaration.noSubject') : say('memo.declaration.firstSubject', { date: dateWords(firstSubjectIn, say) })
  return `${subject} ${say(`memo.declaration.seen.${dataSeen}`)}`
}

const list = (lines: readonly string[]): Content => ({ ul: lines.map(text => spaced(text, 0, 1.5)), markerColor: INK.soft })

const stepBlock = ({ head, lines }: MemoStep): Content => ({
  stack: [{ text: head, bold: true, margin: [0, 3, 0, 1] }, { stack: [list(lines)], margin: [10, 0, 0, 0] }],
})

/** The planned analysis as signed, and the proof of when it was signed. */
export function registeredSection(memo: MemoContent, say: Say): Content[] {
  const { plan, analysis } = memo
  return [
    heading(say('memo.heading.registered')),
    list(analysis.words.frame),
    subheading(say('memo.heading.prerequisites')),
    list(analysis.words.prerequisites),
    subheading(say('memo.heading.steps')),
    ...analysis.words.order.map(stepBlock),
    spaced(analysis.words.notAssessable, 3),
    subheading(say('memo.heading.plan')),
    facts([
      [say('memo.fact.planSigned'), momentWords(plan.signedAt, say)],
      [say('memo.fact.planHash'), hashText(plan.hash)],
      [say('memo.fact.declaration'), declarationWords(plan, say)],
      ...(plan.amendmentReason === null ? [] : [[say('memo.fact.amendment'), plan.amendmentReason] as const]),
    ]),
    ...plan.marks.map(mark => paragraph(say(`memo.mark.${mark}`))),
    ...(plan.signatures.length === 0 ? [] : [spaced(signatureRows(plan.signatures, say), 6)]),
  ]
}
