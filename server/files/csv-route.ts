import { checkDocument } from '../documents/check.ts'
import { shownValue } from '../documents/problem.ts'
import { MAX_ROUTE_POINTS } from '../documents/route.ts'
import type { RouteInput } from '../documents/route.ts'
import { cellReader } from './cell-reader.ts'
import { findColumns, shownHeaders } from './columns.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import { decimalOf } from './csv-numbers.ts'
import { csvTable } from './csv-table.ts'
import { noticeList, problemList } from './file-reading.ts'
import type { NoticeList, ProblemList } from './file-reading.ts'
import { routeOf } from './route-reading.ts'
import type { RouteReading } from './route-reading.ts'
import { ROUTE_RANGES, ROUTE_SPECS, STRETCH_FIELDS, routeTableOptions } from './route-table.ts'
import type { RouteField, RouteTableOptions, StretchField } from './route-table.ts'
import { addPoint, emptyTrace } from './trace.ts'
import type { Trace } from './trace.ts'

const MOST_STRETCHES = 5000

/**
 * The route of a table with one point a row, or every problem with line and column.
 *
 * Latitude and longitude are needed; height, speed limit, surface factor and halts per km may follow. A limit, factor
 * or number of halts holds from its row's point to the next; in an empty cell nothing is stated for that piece.
 */
export function readCsvRoute(text: string, options: RouteTableOptions = {}): RouteReading {
  const wishes = checkDocument(routeTableOptions, options)
  if (wishes.problems !== undefined) return { problems: wishes.problems }
  const { name, delimiter, decimal: wantedDecimal, ...columnWishes } = wishes.document
  const problems = problemList()
  const table = csvTable(text, { delimiter, mostRows: MAX_ROUTE_POINTS + 1 }, problems)
  if (table === null) return { problems: problems.list() }
  const { byField, ignored } = findColumns(table.header, ROUTE_SPECS, columnWishes, problems)
  for (const field of ['latDeg', 'lonDeg']) if (!byField.has(field)) problems.add(missingColumn(field, table.header))
  const indices = [...byField.values()].map((column) => column.index)
  const decimal = decimalOf(table.rows, indices, wantedDecimal, problems)
  if (problems.count > 0) return { problems: problems.list() }
  const read = readPoints(table.rows, byField, cellReader(decimal, problems), problems)
  if (problems.count > 0) return { problems: problems.list() }
  const notices = noticeList()
  say(notices, byField, ignored, read.stated)
  const stretches = (along: Float64Array, kept: number[]) => stretchesOf(along, kept, read.stated, problems)
  return routeOf(read.trace, { name: name ?? 'Route', field: 'points', stretches }, { notices, problems })
}

const missingColumn = (field: string, header: CsvRow) => ({
  field,
  detail: `expected a column of this meaning; the headers are ${shownHeaders(header)}. Say which with columns: { ${field}: "…" }`,
  line: header.line,
  column: 1,
})

type Stated = Record<StretchField, (number | null)[]>

function readPoints(
  rows: CsvRow[],
  byField: Map<string, FoundColumn>,
  readCell: ReturnType<typeof cellReader>,
  problems: ProblemList,
): { trace: Trace; stated: Stated } {
  const trace = emptyTrace()
  const stated: Stated = { limitKmh: [], surfaceFactor: [], haltsPerKm: [] }
  const cell = (row: CsvRow, field: RouteField): number | null => {
    const column = byField.get(field)
    return column === undefined ? null : readCell(row, column, ROUTE_RANGES[field])
  }
  for (const row of rows) {
    const place = [row.line, row.columns[byField.get('latDeg')?.index ?? 0]]
    const [latDeg, lonDeg] = (['latDeg', 'lonDeg'] as const).map((field) => {
      const value = cell(row, field)
      if (value !== null) return value
      const { index = 0, header = field } = byField.get(field) ?? {}
      const value_ = shownValue(row.cells[index])
      problems.add({
        field: header,
        value: value_,
        detail: 'expected degrees in every row',
        line: row.line,
        column: row.columns[index],
      })
      return Number.NaN
    })
    addPoint(trace, [latDeg, lonDeg, cell(row, 'elevationM') ?? Number.NaN, ...place], 'points', problems)
    for (const field of STRETCH_FIELDS) stated[field].push(cell(row, field))
  }
  return { trace, stated }
}

function say(notices: NoticeList, byField: Map<string, FoundColumn>, ignored: string[], stated: Stated): void {
  if (ignored.length > 0) notices.add({ detail: `columns not read: ${ignored.slice(0, 30).join(', ')}` })
  for (const { header, unit, isUnitAssumed, line } of byField.values())
    if (isUnitAssumed) notices.add({ detail: `${header}: no unit stated, taken as ${unit?.name}`, line })
  for (const field of STRETCH_FIELDS) {
    const column = byField.get(field)
    const empty = stated[field].filter((value) => value === null).length
    if (column !== undefined && empty > 0)
      notices.add({ detail: `${column.header}: empty in ${empty} rows; nothing is stated there`, line: column.line })
  }
}

type Stretch = NonNullable<RouteInput['stretches']>[number]

/** Neighbouring steps with the same limit, surface and halts as one stretch; of a repeated point the last row counts. */
function stretchesOf(along: Float64Array, kept: number[], stated: Stated, problems: ProblemList): Stretch[] {
  const stretches: Stretch[] = []
  let last = ''
  for (let k = 0; k < kept.length - 1; k++) {
    const row = kept[k + 1] - 1
    const entries = STRETCH_FIELDS.flatMap((field) =>
      stated[field][row] === null ? [] : [[field, stated[field][row]]],
    )
    const key = JSON.stringify(entries)
    const toKm = along[k + 1] / 1000
    if (key === last && entries.length > 0) stretches[stretches.length - 1].toKm = toKm
    else if (entries.length > 0) stretches.push({ fromKm: along[k] / 1000, toKm, ...Object.fromEntries(entries) })
    last = key
  }
  if (stretches.length > MOST_STRETCHES) {
    const detail = `expected at most ${MOST_STRETCHES} changes of limit, surface or halts`
    problems.add({ field: 'stretches', value: `${stretches.length}`, detail, line: 1, column: 1 })
  }
  return stretches
}
