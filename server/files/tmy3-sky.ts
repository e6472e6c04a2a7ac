import { checkDocument } from '../documents/check.ts'
import { shownValue } from '../documents/problem.ts'
import type { SkyColumn } from '../documents/sky.ts'
import { climateOptions } from './climate-options.ts'
import type { ClimateOptions } from './climate-options.ts'
import { climateSky } from './climate-sky.ts'
import { MOST_HOURS, areWideEnough, hoursByKey, placeOf } from './climate-year.ts'
import type { ClimateColumn, ClimateHour, ClimateYear } from './climate-year.ts'
import { csvRows } from './csv-cells.ts'
import type { CsvRow } from './csv-cells.ts'
import type { SkyReading } from './csv-sky.ts'
import { asLabel, noticeList, overLimit, problemList } from './file-reading.ts'
import type { ProblemList } from './file-reading.ts'
import { wrongKind } from './weather-kind.ts'

/**
 * Columns that a sky takes, by the names of the second line: unit and factor to the sky's unit. A value of -9900 is missing.
 *
 * @source Wilcox & Marion 2008, Users Manual for TMY3 Data Sets, NREL/TP-581-43156 (from memory); names as in
 *   its files
 */
const FIELDS: [SkyColumn, string, string, number][] = [
  ['airTempC', 'Dry-bulb (C)', '°C', 1],
  ['dewPointC', 'Dew-point (C)', '°C', 1],
  ['humidityPct', 'RHum (%)', '%', 1],
  ['pressureHpa', 'Pressure (mbar)', 'mbar', 1],
  ['ghiWm2', 'GHI (W/m^2)', 'Wh/m²', 1],
  ['dniWm2', 'DNI (W/m^2)', 'Wh/m²', 1],
  ['dhiWm2', 'DHI (W/m^2)', 'Wh/m²', 1],
  ['windFromDeg', 'Wdir (degrees)', '°', 1],
  ['windMps', 'Wspd (m/s)', 'm/s', 1],
  ['cloudPct', 'TotCld (tenths)', 'tenths', 10],
]
const MISSING = -9900
const HEADERS = 2

/**
 * The sky of some days out of a TMY3 file, or every problem with line and column.
 *
 * A stamp of 01:00 to 24:00 closes its hour, in local standard time without daylight saving; months come from
 * different years.
 */
export function readTmy3Sky(text: string, options: ClimateOptions): SkyReading {
  const wishes = checkDocument(climateOptions, options)
  if (wishes.problems !== undefined) return { problems: wishes.problems }
  const wrong = overLimit(text.length) ?? wrongKind(text, 'tmy3')
  if (wrong !== null) return { problems: [wrong] }
  const found = { problems: problemList(), notices: noticeList() }
  const year = tmy3Year(text.replace(/^\uFEFF/, ''), found.problems)
  if (year === null || found.problems.count > 0) return { problems: found.problems.list() }
  return climateSky(year, wishes.document, found)
}

function tmy3Year(text: string, problems: ProblemList): ClimateYear | null {
  const [station, names, ...rows] = csvRows(text, ',', problems, HEADERS + MOST_HOURS + 1)
  if (problems.count > 0) return null
  const at = { name: asLabel(station.cells[1], 'Place'), lat: 4, lon: 5, zone: 3, elevation: 6 }
  const { place, offsetMin } = placeOf(station, at, problems)
  const columns = columnsOf(names, problems)
  if (rows.length === 0)
    problems.add({ field: 'table', detail: 'expected hours under the header', line: names.line, column: 1 })
  const width = Math.max(2, ...columns.map(({ index }) => index + 1))
  if (problems.count > 0 || !areWideEnough(rows, width, problems)) return null
  const hours = rows.flatMap((row) => hourOf(row, problems) ?? [])
  return { place, offsetMin, columns, hours: hoursByKey(hours, problems), firstLine: rows[0].line }
}

function columnsOf(names: CsvRow, problems: ProblemList): ClimateColumn[] {
  return FIELDS.flatMap(([field, header, unit, factor]) => {
    const index = names.cells.findIndex((name) => name.toLowerCase() === header.toLowerCase())
    if (index >= 0) return [{ field, header, index, unit, factor, isMissing: (value) => value === MISSING }]
    problems.add({ field: header, detail: 'expected a column of this name', line: names.line, column: 1 })
    return []
  })
}

function hourOf(row: CsvRow, problems: ProblemList): ClimateHour | null {
  const [date, time] = row.cells
  const [, month, day, year] = (/^(\d{2})\/(\d{2})\/(\d{4})$/.exec(date) ?? []).map(Number)
  const hour = Number(/^(\d{2}):00$/.exec(time)?.[1] ?? Number.NaN)
  const say = (field: string, index: number, detail: string): null => {
    problems.add({ field, value: shownValue(row.cells[index]), detail, line: row.line, column: row.columns[index] })
    return null
  }
  if (!(month >= 1 && month <= 12 && day >= 1 && day <= 31)) return say('date', 0, 'expected a day as MM/DD/YYYY')
  if (!(hour >= 1 && hour <= 24)) return say('time', 1, 'expected an hour from 01:00 to 24:00')
  return { year, month, day, hour, row }
}
