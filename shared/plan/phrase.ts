/** A sentence as key and parameters; parameters may be phrases themselves. */
export interface Phrase {
  readonly key: string
  readonly params: Readonly<Record<string, PhraseParam>>
}

export type PhraseParam = string | number | Phrase | readonly Phrase[]

/** Looks a key up and fills its parameters in: `$t` on pages, `say` elsewhere. */
export type Translate = (key: string, params: Record<string, string | number>) => string

export const phrase = (key: string, params: Phrase['params'] = {}): Phrase => ({ key, params })

const isPhrase = (param: Exclude<PhraseParam, string | number>): param is Phrase => 'key' in param

/** Words a phrase from the inside out; lists are joined by commas. */
export function wordPhrase({ key, params }: Phrase, translate: Translate): string {
  const worded = Object.entries(params).map(([name, param]): [string, string | number] => {
    if (typeof param !== 'object') return [name, param]
    return [name, isPhrase(param) ? wordPhrase(param, translate) : param.map(each => wordPhrase(each, translate)).join(', ')]
  })
  return translate(key, Object.fromEntries(worded))
}
