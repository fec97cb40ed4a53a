import { UnreadableFile } from './findings'

const NEWLINE = 0x0A

/** Bytes up to and including the last newline, and the rest of an unfinished line. */
function splitAtLastNewline(bytes: Uint8Array): readonly [lines: Uint8Array, rest: Uint8Array] {
  const end = bytes.lastIndexOf(NEWLINE) + 1
  return [bytes.subarray(0, end), bytes.subarray(end)]
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

interface Decoded { readonly text: string, readonly lines: number, readonly fault: 'binary' | 'not-utf8' | null }

/** The lines before the first that cannot be read, and what is the matter with that one. */
function decodeUpToFault(bytes: Uint8Array): Decoded {
  let end = 0
  while (end < bytes.length) {
    const next = bytes.indexOf(NEWLINE, end)
    const line = bytes.subarray(end, next < 0 ? bytes.length : next + 1)
    const fault = line.includes(0) ? 'binary' : decodes(line) ? null : 'not-utf8'
    if (fault !== null) return { ...decodeLines(bytes.subarray(0, end)), fault }
    end += line.length
  }
  return { ...decodeLines(bytes), fault: null }
}

function decodeLines(bytes: Uint8Array): Decoded {
  const text = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true }).decode(bytes)
  return { text, lines: countNewlines(bytes), fault: null }
}

function decode(bytes: Uint8Array): Decoded {
  if (bytes.includes(0)) return decodeUpToFault(bytes)
  try {
    return decodeLines(bytes)
  }
  catch {
    return decodeUpToFault(bytes)
  }
}

/** Small enough that the lines of one piece are parsed in a moment. */
const PIECE = 64 * 1024

async function* smallPieces(source: AsyncIterable<Uint8Array>): AsyncGenerator<Uint8Array> {
  for await (const chunk of source) {
    for (let start = 0; start < chunk.length; start += PIECE) yield chunk.subarray(start, start + PIECE)
  }
}

/** Pieces that end with a newline, but for the last. */
async function* wholeLines(source: AsyncIterable<Uint8Array>): AsyncGenerator<Uint8Array> {
  let pending: Uint8Array = new Uint8Array()
  for await (const chunk of smallPieces(source)) {
    const [lines, rest] = splitAtLastNewline(pending.length === 0 ? chunk : Buffer.concat([pending, chunk]))
    if (lines.length > 0) yield lines
    pending = rest
    if (rest.length > LONGEST_LINE) break
  }
  if (pending.length > 0) yield pending
}

/**
 * Text of a file in whole lines, decoded strictly as UTF-8; a byte order mark at the beginning is dropped.
 * A newline byte never stands inside a multi-byte character, so lines can be decoded one by one.
 *
 * @throws {UnreadableFile} `binary` at a NUL byte, `not-utf8` at bytes that are none, `line-too-long`; with the
 *   line, after every line before it has been handed over.
 */
export async function* textLines(source: AsyncIterable<Uint8Array>): AsyncGenerator<string> {
  let linesBefore = 0
  for await (const piece of wholeLines(source)) {
    const { text, lines, fault } = decode(piece)
    yield linesBefore === 0 && text.startsWith('\uFEFF') ? text.slice(1) : text
    linesBefore += lines
    if (fault !== null) throw new UnreadableFile(fault, { row: linesBefore + 1 })
    if (piece.length > LONGEST_LINE && piece.at(-1) !== NEWLINE) throw new UnreadableFile('line-too-long', { row: linesBefore + 1 })
  }
}
