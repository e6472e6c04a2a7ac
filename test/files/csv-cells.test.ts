import { parse } from 'csv-parse/sync'
import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { csvRows } from '../../server/files/csv-cells.ts'
import { problemList } from '../../server/files/file-reading.ts'

describe('the splitting of a table', () => {
  it('agrees with the csv-parse package on any quoted table', () => {
    const plain = fc.string({ unit: fc.constantFrom('a', '1', '.', ' ', 'é', '-'), maxLength: 6 })
    const wild = fc.string({ unit: fc.constantFrom('a', ',', ';', '"', '\n', ' ', '\t'), maxLength: 6 })
    const cell = fc.oneof(
      plain,
      wild.map((text) => `"${text.replaceAll('"', '""')}"`),
    )
    const table = fc
      .integer({ min: 2, max: 5 })
      .chain((width) =>
        fc.array(fc.array(cell, { minLength: width, maxLength: width }), { minLength: 1, maxLength: 6 }),
      )
    let compared = 0
    fc.assert(
      fc.property(table, fc.constantFrom(',', ';', '|'), (rows, delimiter) => {
        const text = rows.map((row) => row.join(delimiter)).join('\n')
        const problems = problemList()
        const mine = csvRows(text, delimiter, problems).map((row) => row.cells)
        const theirs = parse(text, { delimiter, relax_column_count: true, skip_empty_lines: true, trim: true })
        expect(problems.list()).toEqual([])
        expect(mine).toEqual(theirs.map((row) => row.map((text) => text.trim())))
        compared++
      }),
      { numRuns: 2000, seed: 4 },
    )
    expect(compared).toBe(2000)
  })

  it('keeps the line and column of each cell past quoted line ends of any kind', () => {
    const rows = csvRows('a, b\r\n"x\r\ny" , 1\n\n# no\n  "q""q",\t2\r3,4', ',', problemList())
    expect(rows).toEqual([
      { line: 1, cells: ['a', 'b'], columns: [1, 4] },
      { line: 2, cells: ['x\r\ny', '1'], columns: [1, 6] },
      { line: 6, cells: ['q"q', '2'], columns: [3, 11] },
      { line: 7, cells: ['3', '4'], columns: [1, 3] },
    ])
  })

  it('refuses a line of a thousand commas', () => {
    const problems = problemList()
    csvRows(','.repeat(5000), ',', problems)
    expect(problems.list()).toMatchObject([{ line: 1, column: 1001, detail: 'expected at most 1000 columns' }])
  })
})
