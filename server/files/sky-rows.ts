import { shownValue } from '../documents/problem.ts'
import { MAX_SKY_ROWS } from '../documents/sky.ts'
import type { cellReader } from './cell-reader.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import { asLabel } from './file-reading.ts'
import type { ProblemList } from './file-reading.ts'
import { PLACE_RANGES } from './sky-table.ts'
import type { Moment } from './sky-times.ts'

/** Most places of one sky, as its document has it. */
export const MOST_PLACES = 100

export interface Place {
  name: string
  latDeg: number
  lonDeg: number
  elevationM: number
}

/** The rows of one place in order, with their times and the even step between them. */
export interface PlaceRows {
  place: Place
  rows: CsvRow[]
  times: Moment[]
  stepMs: number
}

interface Sources {
  byField: Map<string, FoundColumn>
  header: CsvRow
  /** The one place of a table without place columns. */
  place?: Place
  timeOf(row: CsvRow): Moment | null
  readCell: ReturnType<typeof cellReader>
}

/** Rows by place, each place's times checked to rise by an even step. */
export function rowsByPlace(rows: CsvRow[], sources: Sources, problems: ProblemList): PlaceRows[] {
  const placeOf = placeReader(sources, problems)
  if (placeOf === null) return []
  const groups = new Map<string, PlaceRows>()
  for (const row of rows) {
    const place = placeOf(row)
    const at = sources.timeOf(row)
    if (place === null || at === null) continue
    let group = groups.get(place.name)
    if (group === undefined) groups.set(place.name, (group = { place, rows: [], times: [], stepMs: Number.NaN }))
    group.rows.push(row)
    group.times.push(at)
    if (groups.size > MOST_PLACES) break
  }
  const found = [...groups.values()]
  if (found.length > MOST_PLACES) {
    const detail = `expected at most ${MOST_PLACES} places`
    problems.add({
      field: 'placeName',
      value: `${found.length}`,
      detail,
      line: found[MOST_PLACES].rows[0].line,
      column: 1,
    })
  }
  const time = sources.byField.get('time') ?? sources.byField.get('hour') ?? sources.byField.get('date')
  if (problems.count === 0) for (const group of found) checkTimes(group, time?.index ?? 0, problems)
  return found
}

type PlaceReader = (row: CsvRow) => Place | null

/** By the table's own place columns where it has them, else the one place given. */
function placeReader({ byField, header, place, readCell }: Sources, problems: ProblemList): PlaceReader | null {
  const own = ['latDeg', 'lonDeg', 'elevationM'].filter((field) => byField.has(field))
  if (own.includes('latDeg') || own.includes('lonDeg')) {
    if (own.length === 3) return ownPlaces(byField, readCell, problems)
    const missing = ['latDeg', 'lonDeg', 'elevationM'].filter((field) => !byField.has(field))
    const detail = 'expected a column of this meaning beside the other place columns'
    for (const field of missing) problems.add({ field, detail, line: header.line, column: 1 })
    return null
  }
  if (place === undefined) {
    const detail =
      'expected columns latitude, longitude and elevation, or the one place of the table: place: { name, latDeg, lonDeg, elevationM }'
    problems.add({ field: 'place', detail, line: header.line, column: 1 })
    return null
  }
  return onePlace(place, byField.get('placeName'), problems)
}

function onePlace(place: Place, column: FoundColumn | undefined, problems: ProblemList): PlaceReader {
  let first: string | undefined
  return (row) => {
    if (column === undefined) return place
    const cell = row.cells[column.index]
    first ??= cell
    if (cell === first) return place
    const detail = `expected ${shownValue(first)} in every row: without latitude and longitude all rows are one place`
    problems.add({ field: column.header, value: shownValue(cell), detail, ...at(row, column) })
    return null
  }
}

const at = (row: CsvRow, column: FoundColumn) => ({ line: row.line, column: row.columns[column.index] })

/** Each place is read once, at its first row; rows that say otherwise of the same name are problems. */
function ownPlaces(
  byField: Map<string, FoundColumn>,
  readCell: Sources['readCell'],
  problems: ProblemList,
): PlaceReader {
  const known = new Map<string, { place: Place | null; cells: string[] }>()
  const columns = (['latDeg', 'lonDeg', 'elevationM'] as const).map((field) => ({ field, column: byField.get(field) }))
  const nameColumn = byField.get('placeName')
  const cellOf = (row: CsvRow, column: FoundColumn | undefined) => (column === undefined ? '' : row.cells[column.index])
  return (row) => {
    const cells = columns.map(({ column }) => cellOf(row, column))
    const name = asLabel(cellOf(row, nameColumn), `${cells[0]}, ${cells[1]}`)
    const before = known.get(name)
    if (before === undefined) {
      const [latDeg, lonDeg, elevationM] = columns.map(({ field, column }) => {
        if (column === undefined) return null
        const count = problems.count
        const value = readCell(row, column, PLACE_RANGES[field])
        if (value === null && problems.count === count)
          problems.add({
            field: column.header,
            value: '""',
            detail: 'expected a value for the place',
            ...at(row, column),
          })
        return value
      })
      const isWhole = latDeg !== null && lonDeg !== null && elevationM !== null
      const place = isWhole ? { name, latDeg, lonDeg, elevationM } : null
      known.set(name, { place, cells })
      return place
    }
    const moved = cells.findIndex((cell, i) => cell !== before.cells[i])
    const column = columns[moved]?.column
    if (column === undefined) return before.place
    const detail = `expected ${shownValue(before.cells[moved])} as in the first row of ${shownValue(name)}`
    problems.add({ field: column.header, value: shownValue(cells[moved]), detail, ...at(row, column) })
    return null
  }
}

/** Times must rise by the step that most rows have; after a gap the count goes on from what was found. */
function checkTimes(group: PlaceRows, index: number, problems: ProblemList): void {
  const { place, rows, times } = group
  const wrong = (i: number, detail: string) =>
    problems.add({
      field: 'time',
      value: shownValue(rows[i].cells[index]),
      detail: `${detail} (${place.name})`,
      line: rows[i].line,
      column: rows[i].columns[index],
    })
  if (rows.length > MAX_SKY_ROWS) return wrong(MAX_SKY_ROWS, `expected at most ${MAX_SKY_ROWS} rows for a place`)
  if (rows.length < 2) return wrong(0, 'expected at least 2 rows for a place')
  const steps = times.slice(1).map((time, i) => time.atMs - times[i].atMs)
  group.stepMs = commonest(steps.filter((stepMs) => stepMs > 0))
  const minutes = (ms: number) => `${Number((ms / 60_000).toFixed(2))} min`
  steps.forEach((stepMs, i) => {
    if (stepMs === 0) wrong(i + 1, 'expected a later time than the row before, found the same')
    else if (stepMs < 0) wrong(i + 1, 'expected a later time than the row before, found an earlier one')
    else if (stepMs !== group.stepMs)
      wrong(i + 1, `expected ${minutes(group.stepMs)} after the row before as elsewhere, found ${minutes(stepMs)}`)
  })
}

function commonest(values: number[]): number {
  const counts = new Map<number, number>()
  for (const value of values) counts.set(value, (counts.get(value) ?? 0) + 1)
  return [...counts].sort((a, b) => b[1] - a[1] || a[0] - b[0])[0]?.[0] ?? Number.NaN
}
