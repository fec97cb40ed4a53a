import { describe, expect, it } from 'vitest'
import { canonicalBytes, canonicalText, NotCanonicalError, sha256 } from '#shared/record/canonical'

describe('canonical form', () => {
  // RFC 8785, section 3.2.2: the sample input and its canonical output.
  it('reproduces the sample of RFC 8785', () => {
    const numbers = JSON.parse('[333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001]') as number[]
    const input = { numbers, string: '€$\u000F\u000aA\'B"\\\\"/', literals: [null, true, false] }
    expect(canonicalText(input)).toBe('{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}')
  })

  it('does not depend on the order of members', () => {
    expect(canonicalText({ b: 1, a: { d: 2, c: 3 } })).toBe(canonicalText({ a: { c: 3, d: 2 }, b: 1 }))
  })

  // FIPS 180-4 examples: SHA-256 of "abc".
  it('hashes as FIPS 180-4 says', () => {
    expect(sha256(new TextEncoder().encode('abc'))).toBe('ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad')
  })

  it.each([
    ['/a', 'not-json', { a: undefined }],
    ['/a/1', 'not-finite', { a: [1, Number.NaN] }],
    ['/a', 'not-finite', { a: Infinity }],
    ['/a', 'not-json', { a: new Date(0) }],
    ['/a', 'lone-surrogate', { a: '\uD800' }],
    ['/a', 'not-nfc', { a: 'e\u0301' }],
    ['', 'not-json', undefined],
  ])('refuses at %j what is %s', (pointer, fault, value) => {
    let caught: unknown
    try {
      canonicalBytes(value)
    }
    catch (error) {
      caught = error
    }
    expect(caught).toBeInstanceOf(NotCanonicalError)
    expect(caught).toMatchObject({ pointer, fault })
  })
})
