import { sha256 } from '@noble/hashes/sha2.js'
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils.js'
import type { ExtractColumns } from './columns'

const number = (x: number | undefined): number | null => (x === undefined || Number.isNaN(x) ? null : x)

/**
 * SHA-256 over the mapped content without arms, rows sorted: the same rows in another order, or with other
 * columns beside them, are the same content.
 */
export function contentHash(columns: ExtractColumns): string {
  const { subject, parameter, visit, value, baseline, unit, site, imputed } = columns
  const flags = Object.keys(columns.flags).sort()
  const rows = subject.map((id, row) => JSON.stringify([
    id, parameter?.[row] ?? null, visit?.[row] ?? null, number(value[row]), number(baseline?.[row]),
    unit?.[row] ?? null, site?.[row] ?? null, imputed?.[row] ?? null, ...flags.map(flag => columns.flags[flag]?.[row] ?? null),
  ]))
  const hash = sha256.create().update(utf8ToBytes(JSON.stringify({ rows: columns.rows, flags })))
  for (const row of rows.sort()) hash.update(utf8ToBytes(`\n${row}`))
  return bytesToHex(hash.digest())
}
