import { shownValue } from '../documents/problem.ts'
import { skyDocument } from '../documents/sky.ts'
import type { SkyColumn, SkyInput } from '../documents/sky.ts'
import type { climateOptions } from './climate-options.ts'
import { hourKey } from './climate-year.ts'
import type { ClimateColumn, ClimateHour, ClimateYear } from './climate-year.ts'
import { cellNumber } from './csv-numbers.ts'
import type { SkyReading } from './csv-sky.ts'
import { asLabel, checkedReading } from './file-reading.ts'
import type { NoticeList, ProblemList } from './file-reading.ts'
import type { Averaging } from './header.ts'
import type { PlaceRows } from './sky-rows.ts'
import { LIGHT, skyRange } from './sky-table.ts'
import { SLACK, checkPlace } from './sky-values.ts'
import type { Values } from './sky-values.ts'
import { instantText, offsetText } from './stamp.ts'
import type { z } from 'zod'

type Wishes = z.output<typeof climateOptions>

const HOUR_MS = 3_600_000
const DAY_MS = 24 * HOUR_MS

/** Irradiance is the hour's mean before the stamp; everything else in these files is as of the stamp. */
const averagingOf = (field: SkyColumn): Averaging =>
  LIGHT.has(field) && field !== 'cloudPct' ? 'preceding' : 'instant'

/**
 * The sky of a span of days out of a typical year: each day takes the hours of the same month and day, 29 February
 * those of the 28th where the file has none.
 *
 * @param year   of the file, in local standard time
 * @param found  problems so far must be none
 */
export function climateSky(
  year: ClimateYear,
  wishes: Wishes,
  found: { problems: ProblemList; notices: NoticeList },
): SkyReading {
  const { problems, notices } = found
  const group = spanOf(year, wishes, found)
  if (problems.count > 0) return { problems: problems.list() }
  const values = valuesOf(group, year.columns, found)
  if (problems.count === 0) checkPlace(group, values, new Map(), problems)
  if (problems.count > 0) return { problems: problems.list() }
  const stamps = group.times.map(({ atMs, offsetMin }) => instantText(atMs, offsetMin))
  const columns = year.columns.filter(({ field }) => values[field] !== undefined)
  const input: SkyInput = {
    name: wishes.name ?? asLabel(`${year.place.name}, typical year`, 'Typical year'),
    source: 'typical',
    issuedAt: wishes.issuedAt ?? instantText(group.times[0].atMs - HOUR_MS, year.offsetMin),
    utcOffset: offsetText(year.offsetMin),
    averaging: Object.fromEntries(columns.map(({ field }) => [field, averagingOf(field)])),
    pressureIs: 'station',
    places: [{ ...year.place, at: stamps, ...values }],
  }
  const summary = {
    places: [{ name: year.place.name, rows: stamps.length }],
    from: stamps[0],
    to: stamps[stamps.length - 1],
    stepMinutes: 60,
    columns: columns.map(({ field, header, unit }) => ({ field, header, unit, averaging: averagingOf(field) })),
    ignored: [],
  }
  return checkedReading(skyDocument, input, { notices: notices.list(), summary })
}

/** The hours of the days wanted, stamped in the year wanted. */
function spanOf(
  year: ClimateYear,
  wishes: Wishes,
  { problems, notices }: { problems: ProblemList; notices: NoticeList },
): PlaceRows {
  const group: PlaceRows = { place: year.place, rows: [], times: [], stepMs: HOUR_MS }
  const from = new Set<string>()
  for (let dayMs = Date.parse(wishes.from); dayMs <= Date.parse(wishes.to); dayMs += DAY_MS) {
    const day = dayIn(year, new Date(dayMs), notices)
    for (let hour = 1; hour <= 24; hour++) {
      const found = year.hours.get(hourKey(day.month, day.day, hour))
      if (found === undefined) {
        const value = `${new Date(dayMs).toISOString().slice(0, 10)} hour ${hour}`
        problems.add({ field: 'hour', value, detail: 'expected a row for it', line: year.firstLine, column: 1 })
        continue
      }
      from.add(`${MONTHS[found.month - 1]} ${found.year}`)
      group.rows.push(found.row)
      group.times.push({ atMs: dayMs + hour * HOUR_MS - year.offsetMin * 60_000, offsetMin: year.offsetMin })
    }
  }
  notices.add({ detail: `a typical year, not a forecast; its hours are of ${[...from].join(', ')}` })
  return group
}

const MONTHS = 'January February March April May June July August September October November December'.split(' ')

/** The day of the typical year that stands for a day of the calendar. */
function dayIn(year: ClimateYear, date: Date, notices: NoticeList): Pick<ClimateHour, 'month' | 'day'> {
  const month = date.getUTCMonth() + 1
  const day = date.getUTCDate()
  if (month !== 2 || day !== 29 || year.hours.has(hourKey(2, 29, 1))) return { month, day }
  notices.add({ detail: '29 February takes the hours of 28 February: the file has none of its own' })
  return { month, day: 28 }
}

function valuesOf(
  { rows }: PlaceRows,
  columns: ClimateColumn[],
  { problems, notices }: { problems: ProblemList; notices: NoticeList },
): Values {
  const values: Values = {}
  for (const column of columns) {
    let clamped = 0
    const cells = rows.map((row) => cellOf(row, column, { problems, onClamp: () => clamped++ }))
    if (clamped > 0) notices.add({ detail: `${column.header}: ${clamped} values just out of range, taken as its end` })
    if (cells.some((cell) => cell !== null)) values[column.field] = cells
    else notices.add({ detail: `${column.header}: no value in these days; taken as not there` })
  }
  if (values.humidityPct !== undefined) delete values.dewPointC
  return withoutCalmDirections(values, notices)
}

function cellOf(
  row: PlaceRows['rows'][number],
  column: ClimateColumn,
  found: { problems: ProblemList; onClamp(): void },
): number | null {
  const cell = row.cells[column.index]
  const raw = cellNumber(cell, '.')
  if (raw === null || column.isMissing(raw)) return null
  const value = Number((raw * column.factor).toPrecision(12))
  const range = skyRange(column.field)
  const [min, max] = [range.minValue ?? -Infinity, range.maxValue ?? Infinity]
  if (value >= min && value <= max) return value
  const [under, over] = SLACK[column.field] ?? [0, 0]
  if (value >= min - under && value <= max + over) {
    found.onClamp()
    return value < min ? min : max
  }
  found.problems.add({
    field: column.header,
    value: shownValue(cell),
    detail: `expected a number from ${min / column.factor} to ${max / column.factor} ${column.unit}, or its code for a missing value`,
    line: row.line,
    column: row.columns[column.index],
  })
  return null
}

/** Direction 0 in these files is calm air, which comes from nowhere; north is 360. */
function withoutCalmDirections(values: Values, notices: NoticeList): Values {
  const { windMps, windFromDeg } = values
  if (windMps === undefined || windFromDeg === undefined) return values
  const directions = windFromDeg.map((from, i) => (from === 0 && windMps[i] === 0 ? null : from))
  if (directions.some((from) => from !== null)) return { ...values, windFromDeg: directions }
  notices.add({ detail: 'calm throughout: no wind is taken' })
  const { windMps: _speed, windFromDeg: _from, ...rest } = values
  return rest
}
