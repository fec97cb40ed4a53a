import { sha256 } from '@noble/hashes/sha2.js'
import { bytesToHex, concatBytes, hexToBytes } from '@noble/hashes/utils.js'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { consistencyProof, inclusionProof, treeRoot, verifyConsistency, verifyInclusion } from '#shared/record/merkle'

const leafHash = (hex: string) => bytesToHex(sha256(concatBytes(Uint8Array.of(0), hexToBytes(hex))))

// Inputs and roots of the test tree that implementations of RFC 6962 share (its tree is that of RFC 9162,
// section 2.1); written down from memory, and confirmed by reproducing all eight roots.
const INPUTS = ['', '00', '10', '2021', '3031', '40414243', '5051525354555657', '606162636465666768696a6b6c6d6e6f']
const ROOTS = [
  '6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d',
  'fac54203e7cc696cf0dfcb42c92a1d9dbaf70ad9e621f4bd8d98662f00e3c125',
  'aeb6bcfe274b70a14fb067a5e5578264db0fa9b51af5e0ba159158f329e06e77',
  'd37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7',
  '4e3bbb1f7b478dcfe71fb631631519a3bca12c9aefca1612bfce4c13a86264d4',
  '76e67dadbcdf1e10e1b74ddc608abd2f98dfb16fbce75277b5232a127f2087ef',
  'ddb89be403809e325750d3d263cd78929c2942b7942a34b77e122c9594a74c8c',
  '5dc9da79a70659a9ad559cb701ded9a2ab9d823aad2f4960cfe370eff4604328',
]
const leaves = INPUTS.map(leafHash)

const FLIPPED: Record<string, string> = { 0: '1' }
const changed = (hash: string) => (FLIPPED[hash[0]!] ?? '0') + hash.slice(1)

describe('Merkle tree of RFC 9162', () => {
  it('has the hash of nothing as root of no leaf', () => {
    expect(treeRoot([])).toBe('e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855')
  })

  it.each(ROOTS.map((root, index) => [index + 1, root] as const))('has the shared root over %i leaves', (size, root) => {
    expect(treeRoot(leaves.slice(0, size))).toBe(root)
  })

  it('proves each leaf in each size, and nothing else', () => {
    for (let size = 1; size <= leaves.length; size++) {
      for (let index = 0; index < size; index++) {
        const proof = inclusionProof(leaves.slice(0, size), index)
        const claim = { leaf: leaves[index]!, index, size, proof, root: ROOTS[size - 1]! }
        expect(verifyInclusion(claim)).toBe(true)
        expect(verifyInclusion({ ...claim, leaf: changed(claim.leaf) })).toBe(false)
        expect(verifyInclusion({ ...claim, root: changed(claim.root) })).toBe(false)
        expect(verifyInclusion({ ...claim, index: size })).toBe(false)
        if (proof.length > 0) expect(verifyInclusion({ ...claim, proof: proof.slice(1) })).toBe(false)
      }
    }
  })

  it('proves that a longer tree continues a shorter one, and notices a rewritten leaf', () => {
    fc.assert(fc.property(fc.integer({ min: 1, max: 70 }), fc.integer({ min: 0, max: 40 }), fc.nat(), (first, more, at) => {
      const all = Array.from({ length: first + more }, (_, index) => leafHash(index.toString(16).padStart(4, '0')))
      const roots = { firstRoot: treeRoot(all.slice(0, first)), secondRoot: treeRoot(all) }
      const sizes = { first, second: all.length }
      expect(verifyConsistency({ ...sizes, ...roots, proof: consistencyProof(all, first) })).toBe(true)
      const rewritten = all.with(at % first, leafHash('ffff'))
      const forged = { firstRoot: roots.firstRoot, secondRoot: treeRoot(rewritten), proof: consistencyProof(rewritten, first) }
      expect(verifyConsistency({ ...sizes, ...forged })).toBe(false)
    }), { seed: 20261201, numRuns: 300 })
  })

  it('refuses proofs of what is not there', () => {
    expect(() => inclusionProof(leaves, 8)).toThrow(RangeError)
    expect(() => consistencyProof(leaves, 0)).toThrow(RangeError)
    expect(() => consistencyProof(leaves, 9)).toThrow(RangeError)
  })
})
