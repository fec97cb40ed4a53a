import { Readable, pipeline } from 'node:stream'
import { CsvError, parse } from 'csv-parse'
import { UnreadableFile } from './findings'
import { textLines } from './utf8'

const DELIMITERS = { comma: ',', semicolon: ';', tab: '\t' } as const
export type Delimiter = keyof typeof DELIMITERS

/** One record. Row 1 is the header; empty lines count, as a spreadsheet counts them. */
export interface CsvRow { readonly row: number, readonly cells: readonly string[] }

export interface CsvFile {
  readonly delimiter: Delimiter
  /** Names of the columns, without blanks around them, in Unicode form NFC. */
  readonly header: readonly string[]
  readonly rows: AsyncIterable<CsvRow>
}

const MOST_COLUMNS = 2000
const LONGEST_RECORD = 1024 * 1024

/**
 * The separator of the header line: the candidate that occurs most often outside quotes, a comma when none does.
 */
export function recogniseDelimiter(text: string): Delimiter {
  const counts: Record<Delimiter, number> = { comma: 0, semicolon: 0, tab: 0 }
  let inQuotes = false
  for (const character of text) {
    if (character === '"') inQuotes = !inQuotes
    else if (inQuotes) continue
    else if (character === '\n' || character === '\r') break
    else if (character === ',') counts.comma += 1
    else if (character === ';') counts.semicolon += 1
    else if (character === '\t') counts.tab += 1
  }
  const order: Delimiter[] = ['comma', 'semicolon', 'tab']
  return order.reduce((best, candidate) => counts[candidate] > counts[best] ? candidate : best)
}

/** The first piece that is not blank, and all pieces from there on. */
async function withFirst(source: AsyncIterable<string>): Promise<{ first: string, all: AsyncIterable<string> }> {
  const iterator = source[Symbol.asyncIterator]()
  let lead = ''
  for (let next = await iterator.next(); !next.done; next = await iterator.next()) {
    lead += next.value
    if (lead.trim() !== '') break
  }
  if (lead.trim() === '') throw new UnreadableFile('empty-file')
  return { first: lead.trimStart(), all: resume(lead, iterator) }
}

async function* resume(lead: string, iterator: AsyncIterator<string>): AsyncGenerator<string> {
  try {
    yield lead
    for (let next = await iterator.next(); !next.done; next = await iterator.next()) yield next.value
  }
  finally {
    await iterator.return?.()
  }
}

interface ParsedRecord { readonly record: string[], readonly info: { readonly records: number, readonly empty_lines: number } }

const rowOf = ({ records, empty_lines }: ParsedRecord['info']): number => records + empty_lines

function asUnreadable(error: unknown): unknown {
  if (!(error instanceof CsvError)) return error
  const code = error.code === 'CSV_MAX_RECORD_SIZE' ? 'line-too-long' : 'quotes'
  const { records, empty_lines } = error as unknown as ParsedRecord['info']
  return new UnreadableFile(code, Number.isInteger(records) ? { row: records + (empty_lines ?? 0) + 1 } : {})
}

async function* recordsOf(text: AsyncIterable<string>, delimiter: Delimiter): AsyncGenerator<CsvRow> {
  const parser = parse({
    delimiter: DELIMITERS[delimiter],
    record_delimiter: ['\r\n', '\n', '\r'],
    relax_column_count: true, // widths are judged by the reader, which names the row
    skip_empty_lines: true,
    max_record_size: LONGEST_RECORD,
    info: true,
  })
  const source = new UpToFault(text)
  pipeline(Readable.from(source), parser, () => {}) // a failure reaches whoever reads the parser
  try {
    for await (const { record, info } of parser as AsyncIterable<ParsedRecord>) yield { row: rowOf(info), cells: record }
  }
  catch (error) {
    throw source.fault ?? asUnreadable(error)
  }
  if (source.fault) throw source.fault
}

/** A text that ends where it cannot be read on: a failing stream would throw away the rows before the fault. */
class UpToFault implements AsyncIterable<string> {
  fault: UnreadableFile | null = null
  readonly #text: AsyncIterable<string>

  constructor(text: AsyncIterable<string>) {
    this.#text = text
  }

  async* [Symbol.asyncIterator](): AsyncGenerator<string> {
    try {
      yield* this.#text
    }
    catch (error) {
      if (!(error instanceof UnreadableFile)) throw error
      this.fault = error
    }
  }
}

/**
 * Reads a CSV file as it comes in: strict UTF-8 with or without byte order mark; comma, semicolon or tab;
 * fields in double quotes. Nothing is held but the line at hand.
 *
 * @throws {UnreadableFile} here or while rows are read: `empty-file`, `binary`, `not-utf8`, `line-too-long`,
 *   `quotes`, `too-many-columns`; with the row where there is one.
 */
export async function openCsv(source: AsyncIterable<Uint8Array>): Promise<CsvFile> {
  const { first, all } = await withFirst(textLines(source))
  const delimiter = recogniseDelimiter(first)
  const rows = recordsOf(all, delimiter)
  const head = await rows.next()
  if (head.done) throw new UnreadableFile('empty-file')
  const header = head.value.cells.map(name => name.trim().normalize('NFC'))
  if (header.length > MOST_COLUMNS) throw new UnreadableFile('too-many-columns', { row: head.value.row }, { most: MOST_COLUMNS })
  return { delimiter, header, rows }
}
