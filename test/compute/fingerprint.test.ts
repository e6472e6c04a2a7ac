import * as fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { canonicalJson, fingerprint } from '../../server/compute/fingerprint.ts'

describe('the fingerprint of a forecast’s inputs', () => {
  test('orders names by UTF-16 code units (RFC 8785, section 3.2.3)', () => {
    const value = { '\u20ac': 1, '\r': 2, '\ufb33': 3, '1': 4, '\ud83d\ude00': 5, '\u0080': 6, '\u00f6': 7 }
    expect(canonicalJson(value)).toBe('{"\\r":2,"1":4,"\u0080":6,"\u00f6":7,"\u20ac":1,"\ud83d\ude00":5,"\ufb33":3}')
  })

  test('is SHA-256 (FIPS 180-4): of "abc" in quotes by an independent tool', () => {
    // printf '"abc"' | sha256sum
    expect(fingerprint('abc')).toBe('6cc43f858fbb763301637b5af970e2a46b46f461f27e5a0f41e009c59b827b25')
  })

  test('does not depend on the order of names, and says the same as JSON', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (value) => {
        expect(JSON.parse(canonicalJson(value))).toEqual(JSON.parse(JSON.stringify(value)))
        expect(fingerprint(backwards(value))).toBe(fingerprint(value))
      }),
      { numRuns: 500 },
    )
  })

  test('leaves out what is undefined, as JSON does', () => {
    expect(fingerprint({ a: 1, date: undefined })).toBe(fingerprint({ a: 1 }))
  })

  test('changes with any value', () => {
    expect(fingerprint({ a: [1, 2] })).not.toBe(fingerprint({ a: [2, 1] }))
    expect(fingerprint({ a: 1 })).not.toBe(fingerprint({ a: '1' }))
  })
})

function backwards(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(backwards)
  if (value === null || typeof value !== 'object') return value
  const entries = Object.entries(value)
  return Object.fromEntries(
    entries.map((_, i) => {
      const [name, inner] = entries[entries.length - 1 - i]
      return [name, backwards(inner)]
    }),
  )
}
