import type { PrerequisiteVerdict, Reason, SeenVerdict } from '#shared/plan/terms'

interface Verdict { readonly word: SeenVerdict, readonly reason: Reason | null }

/** Verdicts in words: whole, and shortened for the ledger. */
export function useVerdictWords() {
  const { t } = useI18n()

  const reason = (code: Reason) => t(`verdict.reason.${code}`)

  function whole(verdict: Verdict, stepLabel: string | null): string {
    const word = t(`verdict.word.${verdict.word}`)
    if (verdict.word === 'fallback-applies' && stepLabel) return t('pages.verdict.fallback', { step: stepLabel })
    return verdict.reason ? `${word}: ${reason(verdict.reason)}` : word
  }

  function short(verdict: Verdict, stepLabel: string | null): string {
    return verdict.word === 'fallback-applies' && stepLabel ? stepLabel : t(`verdict.short.${verdict.word}`)
  }

  const prerequisite = (verdict: PrerequisiteVerdict | 'held') => t(`verdict.prerequisite.${verdict}`)

  return { whole, short, reason, prerequisite }
}
