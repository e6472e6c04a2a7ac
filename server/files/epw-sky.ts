import { checkDocument } from '../documents/check.ts'
import { shownValue } from '../documents/problem.ts'
import type { SkyColumn } from '../documents/sky.ts'
import { climateOptions } from './climate-options.ts'
import type { ClimateOptions } from './climate-options.ts'
import { climateSky } from './climate-sky.ts'
import { MOST_HOURS, areWideEnough, hoursByKey, placeOf, wholeCell } from './climate-year.ts'
import type { ClimateColumn, ClimateHour, ClimateYear } from './climate-year.ts'
import { csvRows } from './csv-cells.ts'
import type { CsvRow } from './csv-cells.ts'
import type { SkyReading } from './csv-sky.ts'
import { asLabel, noticeList, overLimit, problemList } from './file-reading.ts'
import type { ProblemList } from './file-reading.ts'
import { wrongKind } from './weather-kind.ts'

/** First words of the eight lines over the hours; the trade writes the daylight saving line with and without a last S. */
const HEADERS = [
  /^LOCATION$/i,
  /^DESIGN CONDITIONS$/i,
  /^TYPICAL\/EXTREME PERIODS$/i,
  /^GROUND TEMPERATURES$/i,
  /^HOLIDAYS\/DAYLIGHT SAVINGS?$/i,
  /^COMMENTS 1$/i,
  /^COMMENTS 2$/i,
  /^DATA PERIODS$/i,
]

/**
 * Fields of an hour that a sky takes: zero-based place, unit, and the number from which on a value is missing.
 *
 * @source EnergyPlus, Auxiliary Programs: EnergyPlus Weather File (EPW) Data Dictionary, fields N1–N34
 */
const FIELDS: [SkyColumn, string, number, string, number, number][] = [
  ['airTempC', 'dry bulb temperature', 6, '°C', 1, 99.9],
  ['dewPointC', 'dew point temperature', 7, '°C', 1, 99.9],
  ['humidityPct', 'relative humidity', 8, '%', 1, 999],
  ['pressureHpa', 'atmospheric station pressure', 9, 'Pa', 0.01, 999_999],
  ['ghiWm2', 'global horizontal radiation', 13, 'Wh/m²', 1, 9999],
  ['dniWm2', 'direct normal radiation', 14, 'Wh/m²', 1, 9999],
  ['dhiWm2', 'diffuse horizontal radiation', 15, 'Wh/m²', 1, 9999],
  ['windFromDeg', 'wind direction', 20, '°', 1, 999],
  ['windMps', 'wind speed', 21, 'm/s', 1, 999],
  ['cloudPct', 'total sky cover', 22, 'tenths', 10, 99],
]

const COLUMNS = FIELDS.map(
  ([field, header, index, unit, factor, missing]): ClimateColumn => ({
    field,
    header,
    index,
    unit,
    factor,
    isMissing: (value) => value >= missing,
  }),
)
const WIDTH = 23

/**
 * The sky of some days out of an EPW file of hours, or every problem with line and column.
 *
 * Hour 1 to 24 is the hour before its stamp, in local standard time without daylight saving.
 */
export function readEpwSky(text: string, options: ClimateOptions): SkyReading {
  const wishes = checkDocument(climateOptions, options)
  if (wishes.problems !== undefined) return { problems: wishes.problems }
  const wrong = overLimit(text.length) ?? wrongKind(text, 'epw')
  if (wrong !== null) return { problems: [wrong] }
  const found = { problems: problemList(), notices: noticeList() }
  const year = epwYear(text.replace(/^\uFEFF/, ''), found.problems)
  if (year === null || found.problems.count > 0) return { problems: found.problems.list() }
  return climateSky(year, wishes.document, found)
}

function epwYear(text: string, problems: ProblemList): ClimateYear | null {
  const lines = text.split(/\r\n|\r|\n/)
  const headers = lines.slice(0, HEADERS.length).map(headerRow)
  HEADERS.forEach((name, i) => {
    const first = headers[i]?.cells[0] ?? ''
    if (name.test(first)) return
    const detail = `expected line ${i + 1} of an EPW file, which starts with ${HEADER_NAMES[i]}`
    problems.add({
      field: 'header',
      value: shownValue(first.slice(0, 60)),
      detail,
      line: Math.min(i + 1, lines.length),
      column: 1,
    })
  })
  if (problems.count > 0) return null
  const [location] = headers
  const at = { name: asLabel(location.cells[1], 'Place'), lat: 6, lon: 7, zone: 8, elevation: 9 }
  const { place, offsetMin } = placeOf(location, at, problems)
  checkPeriod(headers[7], problems)
  // Lines that start with # are passed over and keep their number.
  const body = `${'#\n'.repeat(HEADERS.length)}${lines.slice(HEADERS.length).join('\n')}`
  const rows = csvRows(body, ',', problems, MOST_HOURS + 1)
  if (rows.length === 0)
    problems.add({ field: 'table', detail: 'expected hours under the header', line: HEADERS.length, column: 1 })
  if (problems.count > 0 || !areWideEnough(rows, WIDTH, problems)) return null
  const hours = hoursByKey(
    rows.map((row) => hourOf(row, problems)),
    problems,
  )
  return { place, offsetMin, columns: COLUMNS, hours, firstLine: HEADERS.length + 1 }
}

const HEADER_NAMES = [
  'LOCATION',
  'DESIGN CONDITIONS',
  'TYPICAL/EXTREME PERIODS',
  'GROUND TEMPERATURES',
  'HOLIDAYS/DAYLIGHT SAVINGS',
  'COMMENTS 1',
  'COMMENTS 2',
  'DATA PERIODS',
]

/** Header lines hold free text, quotes included: they part at commas alone. */
function headerRow(text: string, i: number): CsvRow {
  const row: CsvRow = { line: i + 1, cells: [], columns: [] }
  let column = 1
  for (const cell of text.split(',')) {
    row.cells.push(cell.trim())
    row.columns.push(column)
    column += cell.length + 1
  }
  return row
}

/** One row an hour is what a sky of hours needs. */
function checkPeriod(row: CsvRow, problems: ProblemList): void {
  if (row.cells[2] === '1') return
  problems.add({
    field: 'DATA PERIODS',
    value: shownValue(row.cells[2] ?? ''),
    detail: 'expected 1 record an hour',
    line: row.line,
    column: row.columns[2] ?? 1,
  })
}

function hourOf(row: CsvRow, problems: ProblemList): ClimateHour {
  const whole = (field: string, index: number, min: number, max: number) =>
    wholeCell(row, index, { field, min, max }, problems)
  return {
    year: whole('year', 0, 1800, 2200),
    month: whole('month', 1, 1, 12),
    day: whole('day', 2, 1, 31),
    hour: whole('hour', 3, 1, 24),
    row,
  }
}
