import { setImmediate } from 'node:timers/promises'
import type { ExtractColumns } from '../../shared/decision/columns'

/**
 * Stored form of an extract's mapped columns, rebuildable from its bytes:
 *
 *   8 bytes  `STPCOL01`
 *   4 bytes  length of the description, little-endian, a multiple of 8 less 4 (padded with blanks)
 *   n bytes  description as JSON: number of rows and, per column, its name, kind and dictionary
 *   then the columns in that order, little-endian: numbers as Float64 (missing is NaN), texts as Uint32 codes
 *   into the dictionary, source row numbers as Uint32; each padded to a multiple of 8 bytes.
 */
const MAGIC = 'STPCOL01'

const TEXTS = ['subject', 'parameter', 'visit', 'unit', 'site', 'imputed', 'arm'] as const
const FLAG = 'flag:'

type Described
  = | { readonly name: string, readonly kind: 'rows' }
    | { readonly name: string, readonly kind: 'numbers' }
    | { readonly name: string, readonly kind: 'texts', readonly dictionary: readonly string[] }

interface Description { readonly rows: number, readonly columns: readonly Described[] }

/** The columns that are there, under the names by which they are stored. */
type Named = Record<string, readonly string[] | Float64Array | Uint32Array>

function named({ rows: _, sourceRow, flags, ...rest }: ExtractColumns): Named {
  const present = Object.entries({ sourceRow: Uint32Array.from(sourceRow), ...rest })
    .flatMap(([name, column]) => column === null ? [] : [[name, column] as const])
  return Object.fromEntries([...present, ...Object.entries(flags).map(([name, column]) => [FLAG + name, column] as const)])
}

function encodeTexts(texts: readonly string[]): { dictionary: string[], codes: Uint32Array } {
  const codeOf = new Map<string, number>()
  const codes = Uint32Array.from(texts, (text) => {
    const code = codeOf.get(text) ?? codeOf.size
    codeOf.set(text, code)
    return code
  })
  return { dictionary: [...codeOf.keys()], codes }
}

const padded = (length: number): number => Math.ceil(length / 8) * 8

/** Little-endian bytes of a column, whatever the machine. */
function littleEndian(column: Float64Array | Uint32Array): Uint8Array {
  const width = column.BYTES_PER_ELEMENT
  const bytes = new Uint8Array(padded(column.length * width))
  const view = new DataView(bytes.buffer)
  for (const [index, element] of column.entries()) {
    if (width === 8) view.setFloat64(index * width, element, true)
    else view.setUint32(index * width, element, true)
  }
  return bytes
}

type Encoded = Described & { readonly column: Float64Array | Uint32Array }

function encodeOne(name: string, column: Named[string]): Encoded {
  if (column instanceof Float64Array) return { name, kind: 'numbers', column }
  if (column instanceof Uint32Array) return { name, kind: 'rows', column }
  const { dictionary, codes } = encodeTexts(column)
  return { name, kind: 'texts', dictionary, column: codes }
}

/** The stored form piece by piece; between two columns others get their turn. */
export async function* encodeColumns(columns: ExtractColumns): AsyncGenerator<Uint8Array> {
  const encoded: Encoded[] = []
  for (const [name, column] of Object.entries(named(columns))) {
    encoded.push(encodeOne(name, column))
    await setImmediate()
  }
  yield header({ rows: columns.rows, columns: encoded.map(({ column: _, ...described }) => described) })
  for (const { column } of encoded) {
    yield littleEndian(column)
    await setImmediate()
  }
}

function header(description: Description): Uint8Array {
  const text = Buffer.from(JSON.stringify(description))
  const length = padded(text.length + 4) - 4
  const bytes = Buffer.alloc(12 + length, ' ')
  bytes.write(MAGIC, 0, 'latin1')
  bytes.writeUInt32LE(length, 8)
  text.copy(bytes, 12)
  return bytes
}

/** Reads one column after the other from the bytes behind the description. */
class Cursor {
  readonly #view: DataView
  readonly #rows: number
  #offset: number

  constructor(bytes: Uint8Array, offset: number, rows: number) {
    this.#view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength)
    this.#offset = offset
    this.#rows = rows
  }

  numbers(): Float64Array {
    const start = this.#advance(8)
    return Float64Array.from({ length: this.#rows }, (_, index) => this.#view.getFloat64(start + index * 8, true))
  }

  integers(): Uint32Array {
    const start = this.#advance(4)
    return Uint32Array.from({ length: this.#rows }, (_, index) => this.#view.getUint32(start + index * 4, true))
  }

  #advance(width: number): number {
    const start = this.#offset
    this.#offset += padded(this.#rows * width)
    return start
  }
}

function decodeOne(column: Described, cursor: Cursor): readonly string[] | Float64Array | Uint32Array {
  if (column.kind === 'numbers') return cursor.numbers()
  if (column.kind === 'rows') return cursor.integers()
  return Array.from(cursor.integers(), code => column.dictionary[code] ?? '')
}

/** @throws {RangeError} when the bytes are no stored columns or are cut off. */
export function decodeColumns(bytes: Uint8Array): ExtractColumns {
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength)
  if (buffer.toString('latin1', 0, 8) !== MAGIC) throw new RangeError('not stored columns')
  const length = buffer.readUInt32LE(8)
  const description = JSON.parse(buffer.toString('utf8', 12, 12 + length)) as Description
  const cursor = new Cursor(bytes, 12 + length, description.rows)
  const columns: Named = Object.fromEntries(description.columns.map(column => [column.name, decodeOne(column, cursor)]))
  return assemble(description.rows, columns)
}

function assemble(rows: number, columns: Named): ExtractColumns {
  const numbers = (name: string) => columns[name] instanceof Float64Array ? columns[name] : null
  const texts = (name: string) => Array.isArray(columns[name]) ? columns[name] as readonly string[] : null
  const { sourceRow } = columns
  const [value, subject] = [numbers('value'), texts('subject')]
  if (!(sourceRow instanceof Uint32Array) || value === null || subject === null) throw new RangeError('columns missing')
  const [, parameter, visit, unit, site, imputed, arm] = TEXTS.map(texts)
  const flags = Object.keys(columns).filter(name => name.startsWith(FLAG))
    .map(name => [name.slice(FLAG.length), texts(name) ?? []] as const)
  return {
    rows, sourceRow, subject, value, baseline: numbers('baseline'),
    parameter: parameter ?? null, visit: visit ?? null, unit: unit ?? null, site: site ?? null, imputed: imputed ?? null, arm: arm ?? null,
    flags: Object.fromEntries(flags),
  }
}
