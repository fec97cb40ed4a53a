import { createCoreContext, translate } from '@intlify/core'
import { catalogue, type Locale } from './catalogue'

export type WordingParams = Readonly<Record<string, string | number>>

const contextOf = (locale: Locale) => createCoreContext({ locale, messages: { [locale]: catalogue[locale] }, missingWarn: false, fallbackWarn: false })

const CONTEXTS: Readonly<Record<Locale, ReturnType<typeof contextOf>>> = { en: contextOf('en') }

/**
 * The words of one key, for mails, memos and the command line; pages have the same through vue-i18n.
 *
 * @param params values for `{name}` in the message; `n` also chooses between singular and plural.
 * @throws {Error} when the catalogue has no such key: a missing word is a defect, never an empty line.
 */
export function say(locale: Locale, key: string, params: WordingParams = {}): string {
  const { n } = params
  const said = typeof n === 'number' ? translate(CONTEXTS[locale], key, params, { plural: n }) : translate(CONTEXTS[locale], key, params)
  if (typeof said !== 'string' || said === key) throw new Error(`no wording for ${key} in ${locale}`)
  return said
}
