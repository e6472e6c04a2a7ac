import { shownValue } from '../documents/problem.ts'
import type { SkyColumn } from '../documents/sky.ts'
import type { CsvRow } from './csv-cells.ts'
import type { ProblemList } from './file-reading.ts'
import type { Place } from './sky-rows.ts'
import { PLACE_RANGES } from './sky-table.ts'

/** A column of a typical year that the sky takes. */
export interface ClimateColumn {
  field: SkyColumn
  /** As the file's dictionary or header names it. */
  header: string
  index: number
  unit: string
  /** Value in the sky's unit = value × factor. */
  factor: number
  /** Whether a number stands for no value. */
  isMissing(value: number): boolean
}

/** One hour of a typical year: month 1 to 12, day, and hour 1 to 24, the hour before its stamp. */
export interface ClimateHour {
  year: number
  month: number
  day: number
  hour: number
  row: CsvRow
}

/** A typical year as its file tells it, hours in local standard time without daylight saving. */
export interface ClimateYear {
  place: Place
  offsetMin: number
  columns: ClimateColumn[]
  /** By `hourKey`. */
  hours: Map<number, ClimateHour>
  /** Line of the first hour, for problems of the whole table. */
  firstLine: number
}

export const hourKey = (month: number, day: number, hour: number): number => (month * 32 + day) * 32 + hour

/** Most rows of a year of hours, and a few to say that there are too many. */
export const MOST_HOURS = 8784

/** The hours by their place in the year, each once; what is doubled or out of the calendar is a problem. */
export function hoursByKey(hours: ClimateHour[], problems: ProblemList): Map<number, ClimateHour> {
  const byKey = new Map<number, ClimateHour>()
  for (const hour of hours) {
    const key = hourKey(hour.month, hour.day, hour.hour)
    const before = byKey.get(key)
    if (before === undefined) byKey.set(key, hour)
    else
      problems.add({
        field: 'hour',
        value: `${hour.month}/${hour.day} hour ${hour.hour}`,
        detail: `expected every hour of the year once; line ${before.row.line} has it too`,
        line: hour.row.line,
        column: 1,
      })
  }
  return byKey
}

/** A cell as a whole number in a range; NaN with a problem where it is none. */
export function wholeCell(row: CsvRow, index: number, meant: WholeMeaning, problems: ProblemList): number {
  const cell = row.cells[index] ?? ''
  const value = /^\d{1,4}$/.test(cell) ? Number(cell) : Number.NaN
  if (value >= meant.min && value <= meant.max) return value
  const { field, min, max } = meant
  problems.add({
    field,
    value: shownValue(cell),
    detail: `expected a whole number from ${min} to ${max}`,
    line: row.line,
    column: row.columns[index] ?? 1,
  })
  return Number.NaN
}

interface WholeMeaning {
  field: string
  min: number
  max: number
}

/** Where a typical year holds, from the cells of its header: place and hours from UTC. */
export function placeOf(
  row: CsvRow,
  at: { name: string; lat: number; lon: number; zone: number; elevation: number },
  problems: ProblemList,
): { place: Place; offsetMin: number } {
  const number = (field: string, index: number, min: number, max: number): number => {
    const cell = row.cells[index] ?? ''
    const value = /^[+-]?\d{1,6}(?:\.\d{1,12})?$/.test(cell) ? Number(cell) : Number.NaN
    if (!(value >= min && value <= max))
      problems.add({
        field,
        value: shownValue(cell),
        detail: `expected a number from ${min} to ${max}`,
        line: row.line,
        column: row.columns[index] ?? 1,
      })
    return value
  }
  const ranged = (field: keyof typeof PLACE_RANGES, index: number) =>
    number(field, index, PLACE_RANGES[field].minValue ?? -Infinity, PLACE_RANGES[field].maxValue ?? Infinity)
  const offsetMin = Math.round(number('time zone', at.zone, -12, 14) * 60)
  return {
    place: {
      name: at.name,
      latDeg: ranged('latDeg', at.lat),
      lonDeg: ranged('lonDeg', at.lon),
      elevationM: ranged('elevationM', at.elevation),
    },
    offsetMin,
  }
}

/** Whether every row has so many cells; one problem for each that has not. */
export function areWideEnough(rows: CsvRow[], width: number, problems: ProblemList): boolean {
  const before = problems.count
  for (const row of rows)
    if (row.cells.length < width)
      problems.add({
        field: 'table',
        value: `${row.cells.length} cells`,
        detail: `expected at least ${width} cells`,
        line: row.line,
        column: 1,
      })
  return problems.count === before
}
