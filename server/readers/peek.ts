/** Enough to hold the header and the first rows of any table. */
const PEEKED = 256 * 1024

export interface Peeked {
  readonly head: Uint8Array
  /** The head is all there is. */
  readonly whole: boolean
  /** Every byte, the head included; to be read once. */
  readonly all: AsyncIterable<Uint8Array>
}

async function* resume(read: readonly Uint8Array[], iterator: AsyncIterator<Uint8Array>): AsyncGenerator<Uint8Array> {
  try {
    yield* read
    for (let next = await iterator.next(); !next.done; next = await iterator.next()) yield next.value
  }
  finally {
    await iterator.return?.()
  }
}

/** Looks at the beginning of a stream without taking it away from whoever reads the stream next. */
export async function peek(source: AsyncIterable<Uint8Array>): Promise<Peeked> {
  const iterator = source[Symbol.asyncIterator]()
  const read: Uint8Array[] = []
  let size = 0
  let whole = false
  while (size < PEEKED && !whole) {
    const next = await iterator.next()
    whole = next.done === true
    if (!next.done) {
      read.push(next.value)
      size += next.value.length
    }
  }
  return { head: Buffer.concat(read), whole, all: resume(read, iterator) }
}
