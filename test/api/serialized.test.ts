import { expect, test } from 'vitest'
import { serialized } from '../../server/api/serialized.ts'
import { JsonText } from '../../server/store/json-text.ts'

const text = new JsonText('{"b": [1, 2.50]}')

test.each([
  [{ a: 1, plan: text, c: 'é' }, '{"a":1,"c":"é","plan":{"b": [1, 2.50]}}'],
  [{ 'a "b"': text }, '{"a \\"b\\"":{"b": [1, 2.50]}}'],
  [{ left: undefined, one: text, two: text }, '{"one":{"b": [1, 2.50]},"two":{"b": [1, 2.50]}}'],
  [{ a: 1, plan: null }, '{"a":1,"plan":null}'],
  [[1, { a: text }], '[1,{"a":{"b":[1,2.5]}}]'],
  ['text', '"text"'],
  [null, 'null'],
])('an answer is JSON with kept texts put in as they are: %#', (answer, json) => {
  expect(serialized(answer)).toBe(json)
})
