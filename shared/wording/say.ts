import { createCoreContext, translate } from '@intlify/core'
import { catalogue, type Locale } from './catalogue'

export type WordingParams = Readonly<Record<string, string | number>>

const contexts = new Map<Locale, ReturnType<typeof contextOf>>()

const contextOf = (locale: Locale) => createCoreContext({ locale, messages: { [locale]: catalogue[locale] }, missingWarn: false, fallbackWarn: false })

function context(locale: Locale) {
  const known = contexts.get(locale)
  if (known) return known
  const made = contextOf(locale)
  contexts.set(locale, made)
  return made
}

/**
 * The words of one key, for mails, memos and the command line; pages have the same through vue-i18n.
 *
 * @param params values for `{name}` in the message; `n` also chooses between singular and plural.
 * @throws {Error} when the catalogue has no such key: a missing word is a defect, never an empty line.
 */
export function say(locale: Locale, key: string, params: WordingParams = {}): string {
  const plural = typeof params.n === 'number' ? params.n : undefined
  const said = plural === undefined ? translate(context(locale), key, params) : translate(context(locale), key, params, { plural })
  if (typeof said !== 'string' || said === key) throw new Error(`no wording for ${key} in ${locale}`)
  return said
}
