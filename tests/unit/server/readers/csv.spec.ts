import { Readable } from 'node:stream'
import { describe, expect, it } from 'vitest'
import { openCsv, recogniseDelimiter, type CsvRow } from '../../../../server/readers/csv'
import { UnreadableFile } from '../../../../server/readers/findings'

/** A source that hands over its bytes a few at a time, so that every boundary falls somewhere. */
const bytesOf = (content: string | Uint8Array, size = 7): AsyncIterable<Uint8Array> => {
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content
  const pieces = Array.from({ length: Math.ceil(bytes.length / size) }, (_, i) => Buffer.from(bytes.subarray(i * size, (i + 1) * size)))
  return Readable.from(pieces)
}

async function readAll(content: string | Uint8Array, size?: number) {
  const file = await openCsv(bytesOf(content, size))
  const rows: CsvRow[] = []
  for await (const row of file.rows) rows.push(row)
  return { header: file.header, delimiter: file.delimiter, rows }
}

const refusalOf = async (content: string | Uint8Array) => readAll(content).then(
  () => null,
  (error: unknown) => error instanceof UnreadableFile ? error.finding : error,
)

describe('openCsv', () => {
  it.each([
    ['comma', 'USUBJID,AVAL\n01,2.5\n02,\n'],
    ['semicolon', 'USUBJID;AVAL\r\n01;2.5\r\n02;\r\n'],
    ['tab', 'USUBJID\tAVAL\r01\t2.5\r02\t'],
  ])('recognises %s', async (delimiter, text) => {
    expect(await readAll(text)).toEqual({
      delimiter, header: ['USUBJID', 'AVAL'], rows: [{ row: 2, cells: ['01', '2.5'] }, { row: 3, cells: ['02', ''] }],
    })
  })

  it('drops a byte order mark, trims names and keeps cells as they are', async () => {
    const { header, rows } = await readAll('\uFEFF USUBJID ,"Age, years"\n 01 ,"say ""no"""\n')
    expect(header).toEqual(['USUBJID', 'Age, years'])
    expect(rows[0]?.cells).toEqual([' 01 ', 'say "no"'])
  })

  it('counts empty lines and quoted line breaks as a spreadsheet does', async () => {
    const { rows } = await readAll('A,B\n1,"two\nlines"\n\n3,4\n')
    expect(rows.map(({ row }) => row)).toEqual([2, 4])
  })

  it('keeps characters of several bytes whole at every boundary', async () => {
    for (const size of [1, 2, 3, 5]) {
      expect((await readAll('A,B\nµ,高\n', size)).rows[0]?.cells).toEqual(['µ', '高'])
    }
  })

  it('hands over rows of any width: the reader judges them', async () => {
    expect((await readAll('A,B\n1\n1,2,3\n')).rows.map(({ cells }) => cells.length)).toEqual([1, 3])
  })

  it.each([
    ['nothing', '', 'empty-file', null],
    ['blanks', ' \n\r\n ', 'empty-file', null],
    ['a NUL byte', 'A,B\n1,2\n3,\u0000\n', 'binary', 3],
    ['bytes that are no UTF-8', Buffer.from([0x41, 0x0A, 0x31, 0x0A, 0xE9, 0x0A]), 'not-utf8', 3],
    ['a picture', Buffer.from([0x89, 0x50, 0x4E, 0x47, 0x0D, 0x0A, 0x1A, 0x0A, 0x00, 0x00]), 'not-utf8', 1],
    ['UTF-16', Buffer.from('\uFEFFA,B\n', 'utf16le'), 'binary', 1],
    ['a quote that never closes', 'A,B\n1,2\n1,"2\n3,4\n', 'quotes', 3],
    ['a quote in the middle', 'A,B\n1,2"3\n', 'quotes', 2],
  ])('refuses %s', async (_, content, code, row) => {
    expect(await refusalOf(content)).toMatchObject({ severity: 'refuse', code, row })
  })

  it('refuses a line that never ends without holding more than a piece of it', async () => {
    async function* endless() {
      for (let i = 0; i < 1000; i++) yield Buffer.alloc(64 * 1024, 'x')
    }
    await expect(openCsv(endless())).rejects.toMatchObject({ finding: { code: 'line-too-long', row: 1 } })
  })
})

describe('recogniseDelimiter', () => {
  it('looks at the first line and outside quotes only', () => {
    expect(recogniseDelimiter('"a,b,c";d\n1,2,3,4')).toBe('semicolon')
    expect(recogniseDelimiter('single')).toBe('comma')
  })
})
