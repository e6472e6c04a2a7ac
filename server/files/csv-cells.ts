import type { ProblemList } from './file-reading.ts'

/** One line of a table: its cells without quotes and outer spaces, and the column of the text where each starts. */
export interface CsvRow {
  line: number
  cells: string[]
  columns: number[]
}

const MOST_CELLS = 1000
/** Longest cell; longer ones are no value, and patterns must not be run over them. [characters] */
const LONGEST_CELL = 500
const QUOTE = 34
const [LF, CR, SPACE, TAB, HASH] = [10, 13, 32, 9, 35]

/**
 * Splits a table as RFC 4180 has it, with one delimiter, any line ends, quotes doubled inside quotes, and empty lines
 * and lines that start with # left out. A quote that never closes or is followed by text is a problem.
 *
 * @param mostRows  stop after so many rows
 * @source RFC 4180, Y. Shafranovich, 2005, §2
 */
export function csvRows(text: string, delimiter: string, problems: ProblemList, mostRows = Infinity): CsvRow[] {
  const separator = delimiter.charCodeAt(0)
  const rows: CsvRow[] = []
  let line = 1
  let lineStart = 0
  let i = 0
  const nextLine = () => {
    i += text.charCodeAt(i) === CR && text.charCodeAt(i + 1) === LF ? 2 : 1
    line++
    lineStart = i
  }
  const isLineEnd = (code: number) => code === LF || code === CR
  const isBlank = (code: number) => code !== separator && (code === SPACE || code === TAB)
  const skipLine = () => {
    while (i < text.length && !isLineEnd(text.charCodeAt(i))) i++
  }

  const tooLong = (place: { line: number; column: number }): null => {
    problems.add({ field: 'table', detail: `expected at most ${LONGEST_CELL} characters in a cell`, ...place })
    return null
  }
  /** The text inside quotes, `i` left behind the closing one; null when it is too long or never closes. */
  const quoted = (): string | null => {
    const opened = { line, column: i - lineStart + 1 }
    let from = ++i
    let cell = ''
    const last = i + 2 * LONGEST_CELL
    for (; i < text.length; ) {
      if (i > last) return tooLong(opened)
      const code = text.charCodeAt(i)
      if (code === QUOTE && text.charCodeAt(i + 1) === QUOTE) {
        cell += text.slice(from, i + 1)
        i += 2
        from = i
      } else if (code === QUOTE) return cell + text.slice(from, i++)
      else if (isLineEnd(code)) nextLine()
      else i++
    }
    problems.add({
      field: 'table',
      value: '"',
      detail: 'expected a closing quote before the end of the file',
      ...opened,
    })
    return null
  }
  const afterQuote = () => {
    while (isBlank(text.charCodeAt(i))) i++
    const code = text.charCodeAt(i)
    if (i >= text.length || code === separator || isLineEnd(code)) return
    const place = { line, column: i - lineStart + 1 }
    problems.add({ field: 'table', value: text[i], detail: 'expected a delimiter after the closing quote', ...place })
    skipLine()
  }
  const bare = (): string | null => {
    const from = i
    for (let code = text.charCodeAt(i); i < text.length && code !== separator && !isLineEnd(code); )
      code = text.charCodeAt(++i)
    if (i - from > LONGEST_CELL) return tooLong({ line, column: from - lineStart + 1 })
    return text.slice(from, i).trim()
  }
  /** One cell added to the row; false when the table cannot be read on. */
  const cell = (row: CsvRow): boolean => {
    while (isBlank(text.charCodeAt(i))) i++
    row.columns.push(i - lineStart + 1)
    const isQuoted = text.charCodeAt(i) === QUOTE
    const value = isQuoted ? quoted() : bare()
    if (value === null) return false
    row.cells.push(value.trim())
    if (isQuoted) afterQuote()
    return true
  }

  while (i < text.length && rows.length < mostRows) {
    if (text.charCodeAt(i) === HASH) skipLine()
    const row: CsvRow = { line, cells: [], columns: [] }
    if (!isLineEnd(text.charCodeAt(i)) && i < text.length) {
      for (;;) {
        if (!cell(row)) return rows
        if (text.charCodeAt(i) !== separator || i >= text.length) break
        i++
        if (row.cells.length < MOST_CELLS) continue
        problems.add({
          field: 'table',
          detail: `expected at most ${MOST_CELLS} columns`,
          line,
          column: i - lineStart + 1,
        })
        return rows
      }
      if (row.cells.length > 1 || row.cells[0] !== '') rows.push(row)
    }
    if (i < text.length) nextLine()
  }
  return rows
}
