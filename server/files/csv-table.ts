import { shownValue } from '../documents/problem.ts'
import type { CsvRow } from './csv-cells.ts'
import { csvRows } from './csv-cells.ts'
import { overLimit, problemList } from './file-reading.ts'
import type { ProblemList } from './file-reading.ts'

export const DELIMITERS = [',', ';', '\t', '|'] as const
export type Delimiter = (typeof DELIMITERS)[number]

export interface Table {
  delimiter: Delimiter
  header: CsvRow
  rows: CsvRow[]
}

const SNIFFED_ROWS = 20
const SNIFFED_TEXT = 200_000
const LONGEST_NAME = 200

/**
 * The table of a text, its delimiter found or given; null when there is none, and the problems say why.
 *
 * @param wishes  mostRows: rows under the header after which reading stops, whoever asks says that there are too many
 */
export function csvTable(
  text: string,
  wishes: { delimiter?: Delimiter; mostRows: number },
  problems: ProblemList,
): Table | null {
  const tooLarge = overLimit(text.length)
  if (tooLarge !== null) {
    problems.add(tooLarge)
    return null
  }
  const body = text.replace(/^\uFEFF/, '')
  const delimiter = wishes.delimiter ?? sniffed(body.slice(0, SNIFFED_TEXT))
  const [first, ...rows] = csvRows(body, delimiter, problems, wishes.mostRows + 1)
  const header = headerFor(first, rows, delimiter)
  if (problems.count > 0) return null
  if (header === undefined || header.cells.length < 2) {
    problems.add({
      field: 'table',
      value: shownValue(header?.cells[0]),
      detail: 'expected a first line with the names of at least 2 columns, parted by comma, semicolon, tab or |',
      line: header?.line ?? 1,
      column: 1,
    })
    return null
  }
  for (const row of rows) checkWidth(row, header, problems)
  header.cells.forEach((name, i) => {
    if (name.length <= LONGEST_NAME) return
    const detail = `expected at most ${LONGEST_NAME} characters in the name of a column`
    problems.add({ field: 'table', value: shownValue(name), detail, line: header.line, column: header.columns[i] })
  })
  if (rows.length === 0)
    problems.add({ field: 'table', detail: 'expected rows under the header', line: header.line, column: 1 })
  return problems.count > 0 ? null : { delimiter, header, rows }
}

/** The delimiter that gives the first rows the header's width, and of several the one that parts most. */
function sniffed(text: string): Delimiter {
  const scores = DELIMITERS.map((delimiter) => {
    const [first, ...rows] = csvRows(text, delimiter, problemList(), SNIFFED_ROWS + 1)
    const header = headerFor(first, rows, delimiter)
    const width = header?.cells.length ?? 0
    if (width < 2) return { delimiter, share: -1, width }
    const share = rows.filter((row) => row.cells.length === width).length / Math.max(rows.length, 1)
    return { delimiter, share, width }
  })
  return scores.sort((a, b) => b.share - a.share || b.width - a.width)[0].delimiter
}

/**
 * The header with names joined again that a delimiter inside brackets parted, like `GHI (W/m2, preceding hour)`, where
 * that gives the width of the rows.
 */
function headerFor(header: CsvRow | undefined, rows: CsvRow[], delimiter: Delimiter): CsvRow | undefined {
  const width = rows[0]?.cells.length
  if (header === undefined || width === undefined || header.cells.length <= width) return header
  const joined: CsvRow = { line: header.line, cells: [], columns: [] }
  let isOpen = false
  header.cells.forEach((cell, i) => {
    if (isOpen) joined.cells[joined.cells.length - 1] += `${delimiter} ${cell}`
    else {
      joined.cells.push(cell)
      joined.columns.push(header.columns[i])
    }
    const last = joined.cells[joined.cells.length - 1]
    isOpen =
      Math.max(last.lastIndexOf('('), last.lastIndexOf('[')) > Math.max(last.lastIndexOf(')'), last.lastIndexOf(']'))
  })
  return joined.cells.length === width ? joined : header
}

/** Cells too many are let pass when they are empty: some programs end each line with a delimiter. */
function checkWidth(row: CsvRow, header: CsvRow, problems: ProblemList): void {
  const { length } = row.cells
  const wanted = header.cells.length
  if (length === wanted || (length > wanted && row.cells.slice(wanted).every((cell) => cell === ''))) return
  problems.add({
    field: 'table',
    value: `${length} cells`,
    detail: `expected ${wanted} cells as in the header; a name or value with the delimiter in it must stand in quotes`,
    line: row.line,
    column: row.columns[Math.min(wanted, length - 1)],
  })
}
