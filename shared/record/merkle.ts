import { sha256 } from '@noble/hashes/sha2.js'
import { bytesToHex, concatBytes, hexToBytes } from '@noble/hashes/utils.js'

/**
 * Merkle tree of RFC 9162 section 2.1 over SHA-256. Leaves are given as their hashes, SHA-256(0x00 ‖ entry),
 * in hex and in order; so are roots and proofs.
 */
const EMPTY_ROOT = bytesToHex(sha256(new Uint8Array()))

const node = (left: string, right: string): string =>
  bytesToHex(sha256(concatBytes(Uint8Array.of(1), hexToBytes(left), hexToBytes(right))))

/** Largest power of two below n, n ≥ 2. */
function split(n: number): number {
  let k = 1
  while (2 * k < n) k *= 2
  return k
}

/** Root over the first leaves (2.1.1); of no leaf it is the hash of nothing. */
export function treeRoot(leaves: readonly string[]): string {
  const [first] = leaves
  if (first === undefined) return EMPTY_ROOT
  if (leaves.length === 1) return first
  const k = split(leaves.length)
  return node(treeRoot(leaves.slice(0, k)), treeRoot(leaves.slice(k)))
}

/** Path from leaf `index` to the root over all leaves (2.1.3.1). @throws {RangeError} when there is no such leaf. */
export function inclusionProof(leaves: readonly string[], index: number): string[] {
  if (!Number.isInteger(index) || index < 0 || index >= leaves.length) throw new RangeError(`no leaf ${index} in a tree of ${leaves.length}`)
  if (leaves.length === 1) return []
  const k = split(leaves.length)
  return index < k
    ? [...inclusionProof(leaves.slice(0, k), index), treeRoot(leaves.slice(k))]
    : [...inclusionProof(leaves.slice(k), index - k), treeRoot(leaves.slice(0, k))]
}

/** Whether the proof leads from the leaf to the root of a tree of that size (2.1.3.2). */
export function verifyInclusion({ leaf, index, size, proof, root }: { leaf: string, index: number, size: number, proof: readonly string[], root: string }): boolean {
  if (index < 0 || index >= size) return false
  let at = index
  let last = size - 1
  let hash = leaf
  for (const sibling of proof) {
    if (last === 0) return false
    if (at % 2 === 1 || at === last) {
      hash = node(sibling, hash)
      while (at % 2 === 0 && at !== 0) {
        at = Math.floor(at / 2)
        last = Math.floor(last / 2)
      }
    }
    else {
      hash = node(hash, sibling)
    }
    at = Math.floor(at / 2)
    last = Math.floor(last / 2)
  }
  return last === 0 && hash === root
}

function subproof(leaves: readonly string[], size: number, whole: boolean): string[] {
  if (size === leaves.length) return whole ? [] : [treeRoot(leaves)]
  const k = split(leaves.length)
  return size <= k
    ? [...subproof(leaves.slice(0, k), size, whole), treeRoot(leaves.slice(k))]
    : [...subproof(leaves.slice(k), size - k, false), treeRoot(leaves.slice(0, k))]
}

/** That the tree over all leaves continues the one over the first `size` (2.1.4.1). @throws {RangeError} unless 0 < size ≤ all. */
export function consistencyProof(leaves: readonly string[], size: number): string[] {
  if (!Number.isInteger(size) || size <= 0 || size > leaves.length) throw new RangeError(`no tree of ${size} in one of ${leaves.length}`)
  return subproof(leaves, size, true)
}

interface Consistency { first: number, second: number, firstRoot: string, secondRoot: string, proof: readonly string[] }

const isPowerOfTwo = (n: number) => {
  let k = 1
  while (k < n) k *= 2
  return k === n
}

/** Whether the proof shows that nothing of the first tree was rewritten in the second (2.1.4.2). */
export function verifyConsistency({ first, second, firstRoot, secondRoot, proof }: Consistency): boolean {
  if (first <= 0 || first > second) return false
  if (first === second) return proof.length === 0 && firstRoot === secondRoot
  const path = isPowerOfTwo(first) ? [firstRoot, ...proof] : [...proof]
  const [start, ...rest] = path
  if (start === undefined) return false
  let fn = first - 1
  let sn = second - 1
  while (fn % 2 === 1) {
    fn = Math.floor(fn / 2)
    sn = Math.floor(sn / 2)
  }
  let fr = start
  let sr = start
  for (const hash of rest) {
    if (sn === 0) return false
    if (fn % 2 === 1 || fn === sn) {
      fr = node(hash, fr)
      sr = node(hash, sr)
      while (fn % 2 === 0 && fn !== 0) {
        fn = Math.floor(fn / 2)
        sn = Math.floor(sn / 2)
      }
    }
    else {
      sr = node(sr, hash)
    }
    fn = Math.floor(fn / 2)
    sn = Math.floor(sn / 2)
  }
  return sn === 0 && fr === firstRoot && sr === secondRoot
}
