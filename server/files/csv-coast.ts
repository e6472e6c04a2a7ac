import { checkDocument } from '../documents/check.ts'
import { coastRuns, MAX_COAST_ROWS } from '../documents/coast-down.ts'
import type { CoastRunsDocument } from '../documents/coast-down.ts'
import { cellReader } from './cell-reader.ts'
import type { Columns } from './coast-rows.ts'
import { checkRows, readRows, runKey } from './coast-rows.ts'
import type { CoastRow, RowGroup, Way } from './coast-runs.ts'
import { checkGroups, grouped, runOf, waysOf } from './coast-runs.ts'
import type { CoastNumber, CoastTableOptions } from './coast-table.ts'
import { COAST_RANGES, COAST_SPECS, coastTableOptions } from './coast-table.ts'
import { coastTimes } from './coast-times.ts'
import { findColumns, shownHeaders } from './columns.ts'
import { decimalOf } from './csv-numbers.ts'
import { csvTable } from './csv-table.ts'
import type { Table } from './csv-table.ts'
import { asLabel, checkedReading, noticeList, problemList } from './file-reading.ts'
import type { FileReading, NoticeList, ProblemList } from './file-reading.ts'

export interface CoastSummary {
  runs: { direction: Way; rows: number; line: number }[]
  columns: { field: string; header: string; unit: string }[]
  ignored: string[]
}

export type CoastReading = FileReading<CoastRunsDocument, CoastSummary>

/**
 * The runs of a logged coast-down with one row a moment, or every problem with line and column.
 *
 * Time and speed are needed, and which way each run went: a column with there and back, a heading, or runs that
 * alternate. A column of runs parts them; rows under which it is empty belong to none and are left out.
 */
export function readCsvCoast(text: string, options: CoastTableOptions = {}): CoastReading {
  const wishes = checkDocument(coastTableOptions, options)
  if (wishes.problems !== undefined) return { problems: wishes.problems }
  const { directions, delimiter, decimal: wantedDecimal, ...columnWishes } = wishes.document
  const problems = problemList()
  const notices = noticeList()
  const table = csvTable(text, { delimiter, mostRows: MAX_COAST_ROWS + 1 }, problems)
  if (table === null) return { problems: problems.list() }
  const { byField, ignored } = findColumns(table.header, COAST_SPECS, columnWishes, problems)
  checkColumns(table, byField, directions === 'alternate', problems)
  const decimal = decimalOf(table.rows, numberColumns(byField), wantedDecimal, problems)
  const time = byField.get('time')
  if (time === undefined || problems.count > 0) return { problems: problems.list() }
  const timeOf = coastTimes(time, table.rows, { decimal, wishedUnit: columnWishes.units?.time }, problems)
  if (timeOf === null) return { problems: problems.list() }
  const rows = readRows(table.rows, byField, { timeOf, readCell: cellReader(decimal, problems) }, notices)
  const place = { line: table.header.line, column: 1 }
  if (problems.count === 0 && rows.length === 0)
    problems.add({ field: 'table', detail: 'expected rows with a time and a speed', ...place })
  if (problems.count > 0) return { problems: problems.list() }
  const { groups, ways } = partedRows(rows, byField, problems)
  if (problems.count > 0) return { problems: problems.list() }
  say(notices, byField, ignored)
  const runs = groups.map((group, i) => runOf(group, nameOf(group, i, ways[i], byField), ways[i]))
  const summary = summaryOf(groups, ways, byField, ignored)
  return checkedReading(coastRuns, { runs }, { notices: notices.list(), summary })
}

/** Rows by run, and the way of each; what is doubtful goes to the problems. */
function partedRows(rows: CoastRow[], byField: Columns, problems: ProblemList): { groups: RowGroup[]; ways: Way[] } {
  const groups = grouped(rows, (row, last) => runKey(row, last, byField))
  checkGroups(groups, byField.get('run'), problems)
  for (const group of groups) checkRows(group, byField, problems)
  const ways = waysOf(groups, { direction: byField.get('direction'), heading: byField.get('headingDeg') }, problems)
  return { groups, ways }
}

/** `run 2, back`: by its label where the file has one. */
function nameOf({ label }: RowGroup, i: number, way: Way, byField: Columns): string {
  const number = `run ${i + 1}`
  return asLabel(`${byField.has('run') ? `run ${label.slice(0, 60)}` : number}, ${way}`, number)
}

function summaryOf(groups: RowGroup[], ways: Way[], byField: Columns, ignored: string[]): CoastSummary {
  return {
    runs: groups.map(({ rows }, i) => ({ direction: ways[i], rows: rows.length, line: rows[0].row.line })),
    columns: [...byField.values()].map(({ field, header, unit }) => ({ field, header, unit: unit?.name ?? '' })),
    ignored,
  }
}

function say(notices: NoticeList, byField: Columns, ignored: string[]): void {
  if (ignored.length > 0) notices.add({ detail: `columns not read: ${ignored.slice(0, 30).join(', ')}` })
  for (const { header, unit, isUnitAssumed, line } of byField.values())
    if (isUnitAssumed) notices.add({ detail: `${header}: no unit stated, taken as ${unit?.name}`, line })
  const wind = byField.get('windMps')
  if (wind !== undefined && byField.has('headwindMps'))
    notices.add({ detail: `${wind.header}: not read, since the headwind is there`, line: wind.line })
}

const isNumber = (field: string): field is CoastNumber => Object.hasOwn(COAST_RANGES, field)

const numberColumns = (byField: Columns): number[] =>
  [...byField.values()].filter(({ field }) => isNumber(field) || field === 'time').map(({ index }) => index)

/** What a table must have, and columns that stand in for one another. */
function checkColumns({ header }: Table, byField: Columns, isAlternate: boolean, problems: ProblemList): void {
  const need = (field: string, detail: string) =>
    problems.add({ field, detail: `expected ${detail}`, line: header.line, column: 1 })
  for (const field of ['time', 'speedKmh'])
    if (!byField.has(field))
      need(
        field,
        `a column of this meaning; the headers are ${shownHeaders(header)}. Say which with columns: { ${field}: "…" }`,
      )
  const hasWay = byField.has('direction') || byField.has('headingDeg')
  if (!hasWay && !(isAlternate && byField.has('run')))
    need(
      'direction',
      'which way each run went: a column "direction" with there and back, a "heading (°)", or a column "run" and directions: "alternate"',
    )
  if (byField.has('windMps') && !byField.has('headwindMps')) {
    for (const field of ['windFromDeg', 'headingDeg'])
      if (!byField.has(field))
        need(field, 'a column of this meaning beside the wind’s speed, to know its part along the road')
  }
  if (byField.has('crosswindMps') && !byField.has('headwindMps'))
    need('headwindMps', 'the headwind beside the crosswind')
}
