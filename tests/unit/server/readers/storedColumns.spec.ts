import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { ExtractColumns } from '#shared/decision/columns'
import { decodeColumns, encodeColumns } from '../../../../server/readers/storedColumns'

const small: ExtractColumns = {
  rows: 3, sourceRow: Uint32Array.of(2, 4, 5), subject: ['B1', 'B2', 'B1'], parameter: null, visit: ['Week 8', 'Week 8', ''],
  value: Float64Array.of(0.1, Number.NaN, -0), baseline: null, unit: ['µg/mL', '', 'µg/mL'], site: null, imputed: null, arm: null,
  flags: { 'FASFL': ['Y', '', 'Y'], 'ANL.01': ['Y', 'Y', 'N'] },
}

async function encoded(columns: ExtractColumns): Promise<Uint8Array> {
  const pieces: Uint8Array[] = []
  for await (const piece of encodeColumns(columns)) pieces.push(piece)
  return Buffer.concat(pieces)
}

describe('stored columns', () => {
  it('come back as they were, the sign of zero and missing values included', async () => {
    const back = decodeColumns(await encoded(small))
    expect(back).toEqual(small)
    expect(Object.is(back.value[2], -0)).toBe(true)
  })

  it('are little-endian behind a description padded to 8 bytes', async () => {
    const bytes = await encoded(small)
    expect(Buffer.from(bytes.subarray(0, 8)).toString()).toBe('STPCOL01')
    const body = 12 + new DataView(bytes.buffer, bytes.byteOffset).getUint32(8, true)
    expect(body % 8).toBe(0)
    expect([...bytes.subarray(body, body + 12)]).toEqual([2, 0, 0, 0, 4, 0, 0, 0, 5, 0, 0, 0])
  })

  it('can be read at any offset of a larger buffer', async () => {
    const bytes = await encoded(small)
    const shifted = new Uint8Array(bytes.length + 3)
    shifted.set(bytes, 3)
    expect(decodeColumns(shifted.subarray(3))).toEqual(small)
  })

  it('round-trip whatever a file can hold', async () => {
    const text = fc.string({ unit: 'grapheme' })
    const rows = fc.array(fc.record({ subject: text, visit: text, unit: text, flag: text, value: fc.double(), baseline: fc.double() }))
    await fc.assert(fc.asyncProperty(rows, async (list) => {
      const columns: ExtractColumns = {
        rows: list.length, sourceRow: Uint32Array.from(list.keys()), subject: list.map(({ subject }) => subject), parameter: null,
        visit: list.map(({ visit }) => visit), unit: list.map(({ unit }) => unit), site: null, imputed: null, arm: null,
        value: Float64Array.from(list, ({ value }) => value), baseline: Float64Array.from(list, ({ baseline }) => baseline),
        flags: { FASFL: list.map(({ flag }) => flag) },
      }
      expect(decodeColumns(await encoded(columns))).toEqual(columns)
    }), { numRuns: 200 })
  })

  it('refuse other bytes and bytes that are cut off', async () => {
    expect(() => decodeColumns(new TextEncoder().encode('no columns at all'))).toThrow(RangeError)
    const whole = await encoded(small)
    expect(() => decodeColumns(whole.subarray(0, -8))).toThrow(RangeError)
  })
})
