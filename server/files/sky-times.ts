import { shownValue } from '../documents/problem.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import type { ProblemList } from './file-reading.ts'
import { clockMs, dayMs, offsetMinutes, stamp } from './stamp.ts'
import type { Stamp } from './stamp.ts'

/** An instant and the offset it was written with. */
export interface Moment {
  atMs: number
  offsetMin: number
}

type WallReader = { column: FoundColumn; read(row: CsvRow): Stamp | null; expected: string }

/** How a table's rows are timed: one column of stamps, or a day and a time of day; null with a problem when neither. */
export function timeReader(
  byField: Map<string, FoundColumn>,
  table: { header: CsvRow; rows: CsvRow[] },
  utcOffset: string | undefined,
  problems: ProblemList,
): ((row: CsvRow) => Moment | null) | null {
  const wall = wallReader(byField, table.rows[0])
  if (wall === null) {
    const detail = 'expected a column "time", or "date" and "hour"; or say which with columns: { time: "…" }'
    problems.add({ field: 'time', detail, line: table.header.line, column: 1 })
    return null
  }
  const given = utcOffset === undefined ? Number.NaN : offsetMinutes(utcOffset)
  const stated = offsetOf(wall.column)
  let isOffsetMissed = false
  return (row) => {
    const read = wall.read(row)
    const place = { line: row.line, column: row.columns[wall.column.index] }
    const field = wall.column.header
    const value = shownValue(row.cells[wall.column.index])
    if (read === null) {
      problems.add({ field, value, detail: `expected ${wall.expected}`, ...place })
      return null
    }
    const offsetMin = read.offsetMin ?? (Number.isNaN(stated) ? given : stated)
    if (!Number.isNaN(offsetMin)) return { atMs: read.wallMs - offsetMin * 60_000, offsetMin }
    const how = 'in the stamps (…T08:00+02:00), in the header ("time (UTC+2)") or with utcOffset: "+02:00"'
    if (!isOffsetMissed) problems.add({ field, value, detail: `expected the offset from UTC, ${how}`, ...place })
    isOffsetMissed = true
    return null
  }
}

const STAMP_FORM = 'a time such as 2026-10-17T08:00+02:00 or 17.10.2026 08:00, years 1950 to 2100'

function wallReader(byField: Map<string, FoundColumn>, first: CsvRow): WallReader | null {
  const [time, date, hour] = ['time', 'date', 'hour'].map((field) => byField.get(field))
  const clock = hour ?? time
  const whole = time ?? date
  const isDay = date !== undefined && dayMs(first.cells[date.index]) !== null
  if (date !== undefined && clock !== undefined && (isDay || whole !== time || hour !== undefined))
    return {
      column: clock,
      read: (row) => joined(row, date, clock),
      expected: 'a day such as 2026-10-17 and a time such as 8, 08:00 or 24:00',
    }
  if (whole === undefined) return null
  return { column: whole, read: (row) => stamp(row.cells[whole.index]), expected: STAMP_FORM }
}

function joined(row: CsvRow, date: FoundColumn, clock: FoundColumn): Stamp | null {
  const whole = stamp(row.cells[clock.index])
  if (whole !== null) return whole
  const cell = row.cells[clock.index]
  const [offset] = /(?:Z|[+-]\d{2}:?\d{2})$/i.exec(cell) ?? []
  const day = dayMs(row.cells[date.index])
  const ms = clockMs(cell.slice(0, cell.length - (offset?.length ?? 0)).trim())
  if (day === null || ms === null) return null
  const offsetMin = offset === undefined ? null : offsetMinutes(offset)
  return Number.isNaN(offsetMin) ? null : { wallMs: day + ms, offsetMin }
}

/** An offset that the header states: its name says UTC, or brackets hold UTC+2 or +02:00. */
function offsetOf(column: FoundColumn): number {
  if (column.spec.variant === 'UTC') return 0
  return column.notes.map(offsetMinutes).find((minutes) => !Number.isNaN(minutes)) ?? Number.NaN
}
