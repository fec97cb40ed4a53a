import { UnreadableFile } from './findings'

const NEWLINE = 0x0A

/** Bytes up to and including the last newline, and the rest of an unfinished line. */
function splitAtLastNewline(bytes: Uint8Array): readonly [lines: Uint8Array, rest: Uint8Array] {
  const end = bytes.lastIndexOf(NEWLINE) + 1
  return [bytes.subarray(0, end), bytes.subarray(end)]
}

/** The line, counted from 1 within these bytes, on which a predicate first fails. */
function failingLine(bytes: Uint8Array, holds: (line: Uint8Array) => boolean): number {
  let line = 1
  for (let start = 0; start < bytes.length; line++) {
    const next = bytes.indexOf(NEWLINE, start)
    const end = next < 0 ? bytes.length : next + 1
    if (!holds(bytes.subarray(start, end))) return line
    start = end
  }
  return line
}

function decodes(line: Uint8Array): boolean {
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(line)
    return true
  }
  catch {
    return false
  }
}

function countNewlines(bytes: Uint8Array): number {
  let count = 0
  for (let at = bytes.indexOf(NEWLINE); at >= 0; at = bytes.indexOf(NEWLINE, at + 1)) count += 1
  return count
}

/** Longest line in bytes: beyond it a file is no table of text. */
const LONGEST_LINE = 1024 * 1024

function decodeLines(bytes: Uint8Array, linesBefore: number): string {
  if (bytes.includes(0)) throw new UnreadableFile('binary', { row: linesBefore + failingLine(bytes, line => !line.includes(0)) })
  try {
    return new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes)
  }
  catch {
    throw new UnreadableFile('not-utf8', { row: linesBefore + failingLine(bytes, decodes) })
  }
}

/**
 * Text of a file in whole lines, decoded strictly as UTF-8; a byte order mark at the beginning is dropped.
 * A newline byte never stands inside a multi-byte character, so lines can be decoded one by one.
 *
 * @throws {UnreadableFile} `binary` at a NUL byte, `not-utf8` at bytes that are none, `line-too-long`; with the line.
 */
export async function* textLines(source: AsyncIterable<Uint8Array>): AsyncGenerator<string> {
  let pending: Uint8Array = new Uint8Array()
  let linesBefore = 0
  const decode = (bytes: Uint8Array) => {
    const text = decodeLines(bytes, linesBefore)
    const shown = linesBefore === 0 && text.startsWith('\uFEFF') ? text.slice(1) : text
    linesBefore += countNewlines(bytes)
    return shown
  }
  for await (const chunk of source) {
    const [lines, rest] = splitAtLastNewline(pending.length === 0 ? chunk : Buffer.concat([pending, chunk]))
    if (lines.length > 0) yield decode(lines)
    if (rest.length > LONGEST_LINE) throw new UnreadableFile(rest.includes(0) ? 'binary' : 'line-too-long', { row: linesBefore + 1 })
    pending = rest
  }
  if (pending.length > 0) yield decode(pending)
}
