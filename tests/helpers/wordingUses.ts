import { readdirSync, readFileSync } from 'node:fs'

/** One place where source asks for words. */
export interface WordingUse {
  readonly file: string
  /** Keys written out, and beginnings of keys completed at run time. */
  readonly keys: readonly string[]
  readonly prefixes: readonly string[]
  /** Names given as parameters; null where they are not written out at the call. */
  readonly names: readonly string[] | null
}

const CALL = /(?<![\w.])(\$t|t|say)\(/g
const PAIRS: Record<string, string> = { '(': ')', '[': ']', '{': '}' }
const CLOSERS = new Set(Object.values(PAIRS))

/** The end of a quoted text that starts at `at`; templates may hold code with quotes of its own. */
function skipQuoted(source: string, at: number): number {
  const quote = source[at]!
  let place = at + 1
  while (place < source.length && source[place] !== quote) {
    if (source[place] === '\\') place += 1
    else if (quote === '`' && source.startsWith('${', place)) place = splitList(source, place + 2).end
    place += 1
  }
  return place
}

/** Members of a bracketed list whose first member starts at `from`, split at its own commas only. */
function splitList(source: string, from: number): { members: string[], end: number } {
  const members: string[] = []
  let depth = 0
  let start = from
  for (let at = from; at < source.length; at++) {
    const character = source[at]!
    if ('\'`"'.includes(character)) at = skipQuoted(source, at)
    else if (character in PAIRS) depth += 1
    else if (character === ',' && depth === 0) {
      members.push(source.slice(start, at))
      start = at + 1
    }
    else if (CLOSERS.has(character)) {
      if (depth === 0) return { members: [...members, source.slice(start, at)].filter(member => member.trim() !== ''), end: at }
      depth -= 1
    }
  }
  return { members: [], end: source.length }
}

function namesIn(expression: string | undefined): readonly string[] | null {
  if (expression === undefined) return []
  const text = expression.trim()
  if (!text.startsWith('{') || text.includes('...')) return null
  return splitList(text, 1).members.map(member => /^\s*'?([\w-]+)/.exec(member)?.[1] ?? '')
}

function useIn(file: string, [key = '', params]: readonly string[]): WordingUse {
  return {
    file,
    keys: [...key.matchAll(/'([a-z][A-Za-z]*\.[\w.-]+)'/g), ...key.matchAll(/`([a-z][A-Za-z]*\.[\w.-]+)`/g)].map(([, text]) => text!),
    prefixes: [...key.matchAll(/`([a-z][A-Za-z]*\.[\w.-]*)\.\$\{/g)].map(([, text]) => text!),
    names: namesIn(params),
  }
}

function sourcesBelow(folder: string): string[] {
  return readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter(name => /\.(vue|ts)$/.test(name)).map(name => `${folder}/${name}`)
}

/** Every call of `$t`, `t` and `say` in the sources below the given folders. */
export function wordingUses(folders: readonly string[]): WordingUse[] {
  return folders.flatMap(sourcesBelow).flatMap((file) => {
    const source = readFileSync(file, 'utf8')
    return [...source.matchAll(CALL)].map(({ 1: name, 0: head, index }) => {
      const { members } = splitList(source, index + head.length)
      return useIn(file, name === 'say' ? members.slice(1) : members)
    })
  })
}
