import type { Content } from 'pdfmake/interfaces'
import type { MemoContent } from '../../../shared/memo/content'
import { facts, hashText, heading, paragraph, signatureRows, subheading } from '../blocks'
import { dateWords, momentWords, type Say } from '../words'

function declarationWords({ declaration }: MemoContent['plan'], say: Say): Content {
  if (declaration === null) return say('memo.declaration.none')
  const { firstSubjectIn, dataSeen } = declaration
  const subject = firstSubjectIn === null ? say('memo.declaration.noSubject') : say('memo.declaration.firstSubject', { date: dateWords(firstSubjectIn, say) })
  return `${subject} ${say(`memo.declaration.seen.${dataSeen}`)}`
}

/** The planned analysis as signed, and the proof of when it was signed. */
export function registeredSection(memo: MemoContent, say: Say): Content[] {
  const { plan, analysis } = memo
  return [
    heading(say('memo.heading.registered')),
    { ul: analysis.words.map(words => ({ text: words, margin: [0, 0, 0, 1.5] })), markerColor: '#55625C' },
    subheading(say('memo.heading.plan')),
    facts([
      [say('memo.fact.planSigned'), momentWords(plan.signedAt, say)],
      [say('memo.fact.planHash'), hashText(plan.hash)],
      [say('memo.fact.declaration'), declarationWords(plan, say)],
      ...(plan.amendmentReason === null ? [] : [[say('memo.fact.amendment'), plan.amendmentReason] as const]),
    ]),
    ...plan.marks.map(mark => paragraph(say(`memo.mark.${mark}`))),
    { ...asStack(signatureRows(plan.signatures, say)), margin: [0, 6, 0, 0] },
  ]
}

const asStack = (content: Content) => ({ stack: [content] })
