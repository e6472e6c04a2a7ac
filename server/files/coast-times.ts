import { shownValue } from '../documents/problem.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import { cellNumber, isMissing } from './csv-numbers.ts'
import type { Decimal } from './csv-numbers.ts'
import type { ProblemList } from './file-reading.ts'
import { clockMs, offsetMinutes, stamp } from './stamp.ts'
import { unitNamed, unitsOf } from './units.ts'

/** Times are kept to the microsecond, which is finer than any log of a car. [1/s] */
const TICKS_PER_S = 1e6
const DAY_S = 86_400
const LATEST_S = 1e10

/** Reads a row's time; null with a problem where it is none. */
export type TimeOf = (row: CsvRow) => number | null

/**
 * How the rows of a log are timed, by the first of them: seconds (or another unit of the header), a clock with
 * parts of a second, or a day with a clock. A clock that falls by more than half a day has passed midnight.
 *
 * @param wishedUnit  as the person says, over the header
 * @returns null with a problem where the header states a unit that nobody knows
 */
export function coastTimes(
  column: FoundColumn,
  rows: CsvRow[],
  reading: { decimal: Decimal; wishedUnit?: string },
  problems: ProblemList,
): TimeOf | null {
  const first = rows.find((row) => !isMissing(row.cells[column.index]))?.cells[column.index] ?? ''
  const isNumber = !Number.isNaN(cellNumber(first, reading.decimal) ?? 0)
  const factorS = isNumber ? unitFactor(column, reading.wishedUnit, problems) : 1
  if (factorS === null) return null
  const read = isNumber ? numbers(factorS, reading.decimal) : clocks()
  const expected = isNumber
    ? `seconds from 0 to ${LATEST_S}`
    : 'a time such as 08:15:30.2 or 2026-10-17T08:15:30.2+02:00'
  return (row) => {
    const cell = row.cells[column.index]
    const timeS = read(cell)
    if (timeS !== null) return Math.round(timeS * TICKS_PER_S) / TICKS_PER_S
    const place = { line: row.line, column: row.columns[column.index] }
    problems.add({
      field: column.header,
      value: shownValue(cell),
      detail: `expected ${expected} in every row`,
      ...place,
    })
    return null
  }
}

/** Seconds of the unit that a column of numbers has; null with a problem where it states another. */
function unitFactor(column: FoundColumn, wished: string | undefined, problems: ProblemList): number | null {
  const { header, line } = column
  const stated = [...column.notes, column.spec.variant].filter((note) => note !== undefined)
  const said = wished ?? stated.find((note) => Number.isNaN(offsetMinutes(note)))
  if (said === undefined) return 1
  const unit = unitNamed('duration', said)
  if (unit !== undefined) return unit.factor
  const detail = `unit "${said.slice(0, 30)}" unknown: expected ${unitsOf('duration')}; say it in the header or with units: { time: "s" }`
  problems.add({ field: 'time', value: shownValue(wished ?? header), detail, line, column: column.column })
  return null
}

const numbers =
  (factorS: number, decimal: Decimal) =>
  (cell: string): number | null => {
    const value = (cellNumber(cell, decimal) ?? Number.NaN) * factorS
    return value >= 0 && value <= LATEST_S ? value : null
  }

const FRACTION = /(\d{1,2}:\d{2}:\d{2})[.,](\d{1,9})/

/** Reads clocks and stamps in the order of the rows, across midnights. */
function clocks(): (cell: string) => number | null {
  let days = 0
  let lastS = -Infinity
  return (cell) => {
    const text = cell.slice(0, 60)
    const fraction = Number(`0.${FRACTION.exec(text)?.[2] ?? 0}`)
    const whole = text.replace(FRACTION, '$1')
    const clock = whole.includes(':') ? clockMs(whole) : null
    if (clock !== null) {
      const timeS = clock / 1000 + fraction
      if (timeS < lastS - DAY_S / 2) days++
      lastS = timeS
      return days * DAY_S + timeS
    }
    const at = stamp(whole)
    return at === null ? null : (at.wallMs - (at.offsetMin ?? 0) * 60_000) / 1000 + fraction
  }
}
