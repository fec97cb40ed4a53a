import type { Content } from 'pdfmake/interfaces'
import type { MemoContent } from '../../../shared/memo/content'
import { facts, spaced } from '../blocks'
import { marked } from '../marks'
import { stepName, verdictWords } from '../terms'
import { dateWords, momentWords, type Say } from '../words'

/** Which of the prepared statements fits: by class, and by what the newest verdict says. */
function statement({ deviationClass, verdict, settlement }: MemoContent): string {
  if (settlement.kind === 'report-without-claim') return 'withoutClaim'
  if (deviationClass === 'departure') return 'departure'
  if (verdict.word === 'planned-method-stands') return 'returned'
  return deviationClass === 'unresolved' ? 'unresolved' : 'foreseen'
}

function lead(memo: MemoContent, say: Say): string {
  const { analysis: { registered }, extract, verdict, binding } = memo
  const params = {
    method: say(`plan.methods.${registered.method}`),
    step: stepName(registered, verdict.step, say),
    extract: extract.title,
    cutOff: dateWords(extract.cutOff, say),
  }
  return [
    say(`memo.lead.${statement(memo)}`, params),
    say(binding ? 'memo.lead.binding' : 'memo.lead.provisional'),
    ...(verdict.changesQuestion ? [say('memo.lead.changesQuestion')] : []),
  ].join(' ')
}

/** Title, verdict, class and the facts by which the memo is filed. */
export function opening(memo: MemoContent, signedAt: string, say: Say): Content[] {
  const { study, plan, analysis, verdict, extract, deviation } = memo
  return [
    { text: say('memo.title', { number: memo.number }), style: 'title' },
    { text: say('memo.subtitle', { study: study.protocolNumber, title: study.title }), style: 'soft', margin: [0, 2, 0, 12] },
    { text: analysis.registered.label, style: 'analysis' },
    spaced(marked(verdict.word, verdictWords(analysis.registered, verdict, say), { bold: true, size: 15 }), 3, 8),
    { text: lead(memo, say), style: 'lead', margin: [0, 0, 0, 10] },
    facts([
      [say('memo.fact.class'), { text: say(`deviation.classes.${memo.deviationClass}`), bold: true }],
      [say('memo.fact.force'), say(memo.binding ? 'memo.force.binding' : 'memo.force.provisional')],
      [say('memo.fact.edition'), say(`memo.edition.${memo.edition}`)],
      [say('memo.fact.deviation'), say('memo.fact.deviationOpened', { number: deviation.number, moment: momentWords(deviation.openedAt, say) })],
      [say('memo.fact.plan'), say('memo.fact.planVersion', { version: plan.version, protocol: plan.protocolVersion })],
      [say('memo.fact.extract'), say('memo.fact.extractNumber', { number: extract.number, title: extract.title, cutOff: dateWords(extract.cutOff, say) })],
      [say('memo.fact.sponsor'), say('memo.fact.sponsorPhase', { sponsor: study.sponsor, phase: say(`memo.phase.${study.phase}`) })],
      [say('memo.fact.signed'), momentWords(signedAt, say)],
    ]),
  ]
}
