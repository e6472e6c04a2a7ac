import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { merged, mergePatch } from '../../server/documents/merge-patch.ts'

/** The test cases of RFC 7386, appendix A: original, patch, result. */
const CASES: [unknown, unknown, unknown][] = [
  [{ a: 'b' }, { a: 'c' }, { a: 'c' }],
  [{ a: 'b' }, { b: 'c' }, { a: 'b', b: 'c' }],
  [{ a: 'b' }, { a: null }, {}],
  [{ a: 'b', b: 'c' }, { a: null }, { b: 'c' }],
  [{ a: ['b'] }, { a: 'c' }, { a: 'c' }],
  [{ a: 'c' }, { a: ['b'] }, { a: ['b'] }],
  [{ a: { b: 'c' } }, { a: { b: 'd', c: null } }, { a: { b: 'd' } }],
  [{ a: [{ b: 'c' }] }, { a: [1] }, { a: [1] }],
  [
    ['a', 'b'],
    ['c', 'd'],
    ['c', 'd'],
  ],
  [{ a: 'b' }, ['c'], ['c']],
  [{ a: 'foo' }, null, null],
  [{ a: 'foo' }, 'bar', 'bar'],
  [{ e: null }, { a: 1 }, { e: null, a: 1 }],
  [[1, 2], { a: 'b', c: null }, { a: 'b' }],
  [{}, { a: { bb: { ccc: null } } }, { a: { bb: {} } }],
]

describe('a merge patch', () => {
  test.each(CASES)('of %j by %j', (target, patch, result) => {
    const before = JSON.stringify(target)
    expect(merged(target, patch)).toEqual(result)
    expect(JSON.stringify(target)).toBe(before)
  })

  const problems = (patch: unknown) => checkDocument(mergePatch('car'), patch).problems

  test('may be nested as deep as any document', () => {
    expect(problems({ a: { b: [{ c: { d: [1, null, 'x'] } }] } })).toBeUndefined()
  })

  test.each([
    ['that is no object', [1], 'expected an object'],
    ['with a control character in a text', { a: 'b\u0000' }, 'expected texts without control characters'],
    ['with one in a name', { 'a\u0000': null }, 'expected names without control characters, and none __proto__'],
    ['with half of a character', { a: '\ud800' }, 'expected texts without control characters'],
    ['that would reach for the prototype', JSON.parse('{"a":{"__proto__":{"b":1}}}'), 'expected names without'],
    ['that is nested without end', nested(100_000), 'expected objects and lists in each other at most 32 deep'],
  ])('is refused %s', (_what, patch, detail) => {
    expect(problems(patch)?.[0].detail).toContain(detail)
  })
})

function nested(depth: number): object {
  let patch: object = {}
  for (let i = 0; i < depth; i++) patch = { a: patch }
  return patch
}
