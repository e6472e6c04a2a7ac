import { checkDocument } from '../documents/check.ts'
import { MAX_SKY_ROWS, skyDocument } from '../documents/sky.ts'
import type { SkyColumn, SkyDocument, SkyInput } from '../documents/sky.ts'
import { cellReader } from './cell-reader.ts'
import { findColumns } from './columns.ts'
import type { FoundColumn } from './columns.ts'
import { decimalOf } from './csv-numbers.ts'
import { csvTable } from './csv-table.ts'
import { checkedReading, noticeList, problemList } from './file-reading.ts'
import type { FileReading, NoticeList } from './file-reading.ts'
import type { Averaging } from './header.ts'
import { conventions, pressureIs } from './sky-conventions.ts'
import { MOST_PLACES, rowsByPlace } from './sky-rows.ts'
import type { PlaceRows } from './sky-rows.ts'
import { baseOf, SKY_SPECS, isSkyValue, skyTableOptions } from './sky-table.ts'
import type { SkyTableOptions, SkyValue } from './sky-table.ts'
import { timeReader } from './sky-times.ts'
import { checkPlace, valuesOf } from './sky-values.ts'
import { instantText, offsetText } from './stamp.ts'
import { wrongKind } from './weather-kind.ts'

export interface SkySummary {
  places: { name: string; rows: number }[]
  from: string
  to: string
  stepMinutes: number
  columns: { field: SkyValue; header: string; unit: string; averaging: Averaging }[]
  ignored: string[]
}

export type SkyReading = FileReading<SkyDocument, SkySummary>

/**
 * The sky of a weather table with one row per place and time, or every problem with line and column.
 *
 * Units, what a stamp speaks for and the offset from UTC come from the headers or the options and are never guessed
 * where a wrong guess would change the numbers.
 */
export function readCsvSky(text: string, options: SkyTableOptions): SkyReading {
  const checked = checkDocument(skyTableOptions, options)
  if (checked.problems !== undefined) return { problems: checked.problems }
  const wrong = wrongKind(text, 'table')
  if (wrong !== null) return { problems: [wrong] }
  const wishes = checked.document
  const problems = problemList()
  const notices = noticeList()
  const table = csvTable(text, { delimiter: wishes.delimiter, mostRows: MAX_SKY_ROWS * MOST_PLACES + 1 }, problems)
  if (table === null) return { problems: problems.list() }
  const { byField, ignored } = findColumns(table.header, SKY_SPECS, wishes, problems)
  if (ignored.length > 0) notices.add({ detail: `columns not read: ${ignored.slice(0, 30).join(', ')}` })
  const columns = valueColumns(byField, notices)
  const averaging = conventions(columns, wishes.averaging ?? {}, { problems, notices })
  const pressure = pressureIs(columns.get('pressureHpa'), wishes.pressureIs, problems)
  const timeOf = timeReader(byField, table, wishes.utcOffset, problems)
  const decimal = decimalOf(table.rows, numberColumns(byField), wishes.decimal, problems)
  if (timeOf === null || problems.count > 0) return { problems: problems.list() }

  const readCell = cellReader(decimal, problems)
  const sources = { byField, header: table.header, place: wishes.place, timeOf, readCell }
  const groups = rowsByPlace(table.rows, sources, problems)
  if (problems.count > 0) return { problems: problems.list() }
  const values = valuesOf(groups, columns, readCell, notices)
  if (problems.count === 0) groups.forEach((group, i) => checkPlace(group, values[i], columns, problems))
  if (problems.count > 0) return { problems: problems.list() }
  const input: SkyInput = {
    name: wishes.name,
    source: wishes.source,
    issuedAt: wishes.issuedAt,
    utcOffset: offsetText(groups[0].times[0].offsetMin),
    averaging,
    pressureIs: pressure,
    places: groups.map((group, i) => ({ ...group.place, at: stampsOf(group), ...values[i] })),
  }
  const summary = summaryOf(groups, columns, averaging, ignored)
  return checkedReading(skyDocument, input, { notices: notices.list(), summary })
}

/** The columns with values. Of humidity and dew point one is enough, and humidity is kept. */
function valueColumns(byField: Map<string, FoundColumn>, notices: NoticeList): Map<SkyValue, FoundColumn> {
  const columns = new Map<SkyValue, FoundColumn>()
  for (const [field, column] of byField) if (isSkyValue(field)) columns.set(field, column)
  const dewPoint = columns.get('dewPointC')
  if (dewPoint !== undefined && columns.has('humidityPct')) {
    columns.delete('dewPointC')
    notices.add({ detail: `${dewPoint.header}: not read, since humidity is there`, line: dewPoint.line })
  }
  for (const { header, unit, isUnitAssumed, line } of byField.values())
    if (isUnitAssumed) notices.add({ detail: `${header}: no unit stated, taken as ${unit?.name}`, line })
  return columns
}

const numberColumns = (byField: Map<string, FoundColumn>): number[] =>
  [...byField.values()].filter(({ spec }) => spec.kind !== 'time' && spec.kind !== 'text').map(({ index }) => index)

const stampsOf = ({ times }: PlaceRows): string[] => times.map(({ atMs, offsetMin }) => instantText(atMs, offsetMin))

function summaryOf(
  groups: PlaceRows[],
  columns: Map<SkyValue, FoundColumn>,
  averaging: Partial<Record<SkyColumn, Averaging>>,
  ignored: string[],
): SkySummary {
  const first = groups.map(({ times }) => times[0]).sort((a, b) => a.atMs - b.atMs)[0]
  const last = groups.map(({ times }) => times[times.length - 1]).sort((a, b) => b.atMs - a.atMs)[0]
  return {
    places: groups.map(({ place, rows }) => ({ name: place.name, rows: rows.length })),
    from: instantText(first.atMs, first.offsetMin),
    to: instantText(last.atMs, last.offsetMin),
    stepMinutes: groups[0].stepMs / 60_000,
    columns: [...columns].map(([field, { header, unit }]) => ({
      field,
      header,
      unit: unit?.name ?? '',
      averaging: averaging[baseOf(field)] ?? 'instant',
    })),
    ignored,
  }
}
