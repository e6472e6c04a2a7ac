import { shownValue } from '../documents/problem.ts'
import type { CsvRow } from './csv-cells.ts'
import type { ProblemList } from './file-reading.ts'

const MISSING_WORDS = new Set(['', '-', '--', '---', 'na', 'n/a', 'nan', 'null', 'none', 'missing', 'm', '#n/a'])
/** Numbers that weather tables write for no value; none of them is possible for any column read. */
const MISSING_NUMBERS = new Set([-999, -999.9, -9999, -9999.9, -99999, -999999])

export type Decimal = '.' | ','

export const isMissing = (cell: string): boolean => MISSING_WORDS.has(cell.toLowerCase())

/** A cell's number; null when it says that a value is missing; NaN when it is no number. */
export function cellNumber(cell: string, decimal: Decimal): number | null {
  if (isMissing(cell)) return null
  const plain = cell.replace(/^[\u2212\u2013]/, '-')
  const pattern = decimal === ',' ? DECIMAL_COMMA : DECIMAL_POINT
  if (!pattern.test(plain)) return Number.NaN
  const value = Number(plain.replace(',', '.'))
  return MISSING_NUMBERS.has(value) ? null : value
}

const DECIMAL_POINT = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/
const DECIMAL_COMMA = /^[+-]?(?:\d+,?\d*|,\d+)(?:[eE][+-]?\d+)?$/

/**
 * The decimal sign of a table's number columns. Where both signs appear the reader cannot know which of them parts
 * thousands, and the first cell of the rarer kind is a problem.
 */
export function decimalOf(
  rows: CsvRow[],
  columns: number[],
  given: Decimal | undefined,
  problems: ProblemList,
): Decimal {
  if (given !== undefined) return given
  const found: Record<Decimal, { count: number; row?: CsvRow; index: number }> = {
    '.': { count: 0, index: 0 },
    ',': { count: 0, index: 0 },
  }
  for (const row of rows)
    for (const index of columns) {
      if (!/^[+\-\u2212]?\d*[.,]\d+$/.test(row.cells[index])) continue
      const sign: Decimal = row.cells[index].includes(',') ? ',' : '.'
      if (found[sign].count++ === 0) Object.assign(found[sign], { row, index })
    }
  const winner: Decimal = found[','].count > found['.'].count ? ',' : '.'
  const loser = found[winner === ',' ? '.' : ',']
  if (loser.row !== undefined)
    problems.add({
      field: 'decimal',
      value: shownValue(loser.row.cells[loser.index]),
      detail: `expected a decimal "${winner}" as in most cells; both signs appear, so say which it is: decimal "." or ","`,
      line: loser.row.line,
      column: loser.row.columns[loser.index],
    })
  return winner
}
