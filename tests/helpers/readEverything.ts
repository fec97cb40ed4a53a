import { operations } from '#shared/contract/index'
import { isMedia, type Operation } from '#shared/contract/operation'
import { addressOf, type Client } from './client'

/** Values of every parameter that a reading operation of a study can have. */
export type Places = Readonly<Record<string, readonly string[]>>

/** One answer as it came over the wire. */
export interface Reading { readonly operation: string, readonly path: string, readonly scope: Operation['scope'], readonly text: string }

/** A stream that never ends; what it carries are ids alone. */
const endless = ({ answer }: Operation) => answer !== null && isMedia(answer) && answer.media === 'events'

const shapeOf = ({ params }: Operation): string[] =>
  params === null ? [] : Object.keys((params as unknown as { shape: Record<string, unknown> }).shape)

/** Every combination of parameters; an operation with one that nobody told of fails the walk. */
function fillings(operation: Operation, places: Places): Record<string, string>[] {
  return shapeOf(operation).reduce<Record<string, string>[]>((filled, name) => {
    const values = places[name]
    if (!values) throw new Error(`${operation.id}: the walk does not know what ${name} can be`)
    return filled.flatMap(params => values.map(value => ({ ...params, [name]: value })))
  }, [{}])
}

/** Everything that somebody receives from every reading operation of the contract, refusals included. */
export async function readEverything(client: Client, places: Places): Promise<Reading[]> {
  const readings: Reading[] = []
  for (const operation of operations.filter(each => each.method === 'GET' && !endless(each))) {
    for (const params of fillings(operation, places)) {
      const path = addressOf(operation, { params, query: operation.example.query as object | undefined })
      const response = await client.request(path)
      const headers = ['content-type', 'content-disposition', 'content-length'].map(name => response.headers.get(name)).join(' ')
      readings.push({ operation: operation.id, path, scope: operation.scope, text: `${response.status} ${headers}\n${await response.text()}` })
    }
  }
  return readings
}

const VARYING: readonly (readonly [string, RegExp])[] = [
  ['address', /[\w.+-]+@example\.org/g],
  ['id', /[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}/g],
  ['moment', /\d{4}-\d{2}-\d{2}T\d{2}:\d{2}:\d{2}(?:\.\d+)?Z/g],
  ['hash', /\b[0-9a-f]{64}\b/g],
  ['salt', /\b[0-9a-f]{32}\b/g],
]

/**
 * What differs between any two studies is numbered by order of appearance, so that two walks can be compared
 * byte by byte: which ids, moments and hashes are equal to each other still counts, what they are does not.
 *
 * @param known texts that belong to one study, such as its protocol number.
 */
export function comparable(readings: readonly Reading[], known: Readonly<Record<string, string>>): string {
  const whole = readings.map(({ operation, text }) => `${operation}\n${text}`).join('\n\n')
  const named = Object.entries(known).reduce((text, [name, value]) => text.replaceAll(value, `<${name}>`), whole)
  return VARYING.reduce((text, [name, pattern]) => {
    const numbers = new Map<string, number>()
    return text.replace(pattern, (found) => {
      if (name === 'moment' || name === 'salt') return `<${name}>`
      numbers.set(found, numbers.get(found) ?? numbers.size + 1)
      return `<${name} ${numbers.get(found)}>`
    })
  }, named).replaceAll(/content-length: \d+/g, '')
}
