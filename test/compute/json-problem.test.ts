import * as fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { jsonProblem } from '../../server/compute/json-problem.ts'

const CASES = [
  { text: '', line: 1, column: 1, value: 'the end of the body', detail: 'expected a value' },
  { text: '{"a": 1,}', line: 1, column: 9, value: '"}"', detail: 'expected a name in double quotes' },
  { text: '{a: 1}', line: 1, column: 2, value: '"a"', detail: 'expected a name in double quotes or "}"' },
  { text: '{\n"a" 1}', line: 2, column: 5, value: '"1"', detail: 'expected ":"' },
  { text: '[1 2]', line: 1, column: 4, value: '"2"', detail: 'expected "," or "]"' },
  { text: '[1,\n 01]', line: 2, column: 2, value: '"01"', detail: 'expected a value' },
  { text: '{"a": NaN}', line: 1, column: 7, value: '"NaN"', detail: 'expected a value' },
  { text: '{"a": 1} x', line: 1, column: 10, value: '"x"', detail: 'expected the end of the document' },
  { text: '{"a": [1, {"b": 2}', line: 1, column: 19, value: 'the end of the body', detail: 'expected "," or "]"' },
  { text: "{'a': 1}", line: 1, column: 2, value: '"\'"', detail: 'expected a name in double quotes or "}"' },
]

describe('JSON with a fault', () => {
  test.each(CASES)('$text is faulty at line $line, column $column', ({ text, ...expected }) => {
    expect(jsonProblem(text)).toMatchObject(expected)
  })

  test('an unfinished text names the place where it breaks', () => {
    expect(jsonProblem('["ab\ncd"]')).toMatchObject({ line: 1, column: 5 })
    expect(jsonProblem('["a\\x"]')).toMatchObject({ line: 1, column: 4 })
  })

  test('a deep nest is judged without running out of stack', () => {
    expect(jsonProblem('['.repeat(1_000_000))).toMatchObject({ column: 1_000_001 })
  })

  test('is found exactly where JSON.parse finds one: a character changed, dropped or added', () => {
    let faulty = 0
    let sound = 0
    fc.assert(
      fc.property(
        fc.json(),
        fc.nat(),
        fc.constantFrom('', ',', '"', '}', ']', '0', '\\', 'e', '-', ' ', '\n'),
        fc.nat(1),
        (json, at, put, cut) => {
          const i = at % (json.length + 1)
          const text = json.slice(0, i) + put + json.slice(i + cut)
          const problem = jsonProblem(text)
          if (problem === null) sound++
          else faulty++
          expect(problem === null).toBe(parses(text))
        },
      ),
      { numRuns: 3000 },
    )
    expect(Math.min(faulty, sound)).toBeGreaterThan(300)
  })
})

function parses(text: string): boolean {
  try {
    JSON.parse(text)
    return true
  } catch {
    return false
  }
}
