import { shownValue } from '../documents/problem.ts'
import type { SkyColumn } from '../documents/sky.ts'
import type { cellReader } from './cell-reader.ts'
import type { FoundColumn } from './columns.ts'
import type { CsvRow } from './csv-cells.ts'
import { isMissing } from './csv-numbers.ts'
import type { NoticeList, ProblemList } from './file-reading.ts'
import type { PlaceRows } from './sky-rows.ts'
import { skyRange } from './sky-table.ts'
import type { SkyValue } from './sky-table.ts'

/** Sensors read a little under zero at night and a little over full damp; farther out is a fault of the table. */
export const SLACK: Partial<Record<SkyValue, readonly [number, number]>> = {
  ghiWm2: [20, 0],
  dniWm2: [20, 0],
  dhiWm2: [20, 0],
  humidityPct: [0, 5],
}

const COMPASS = 'N NNE NE ENE E ESE SE SSE S SSW SW WSW W WNW NW NNW'.split(' ')
const NO_DIRECTION = new Set(['CALM', 'C', 'VRB', 'VAR'])

export type ValueColumns = Map<SkyValue, FoundColumn>
export type Values = Partial<Record<SkyValue, (number | null)[]>>

/** Each column's values at each place, in the document's units; a column without one value is left out. */
export function valuesOf(
  places: PlaceRows[],
  columns: ValueColumns,
  readCell: ReturnType<typeof cellReader>,
  notices: NoticeList,
): Values[] {
  const clamped = new Map<FoundColumn, number>()
  const empty = new Set<string>()
  const perPlace = places.map(({ rows, stepMs, place }) => {
    const values: Values = {}
    for (const [field, column] of columns) {
      const onClamp = () => clamped.set(column, (clamped.get(column) ?? 0) + 1)
      const rules = { intervalS: stepMs / 1000, slack: SLACK[field], onClamp }
      const cells = rows.map((row) =>
        field === 'windFromDeg' ? direction(row, column, readCell) : readCell(row, column, skyRange(field), rules),
      )
      if (cells.some((cell) => cell !== null)) values[field] = cells
      else empty.add(`${column.header}: no value at ${place.name}; taken as not there`)
    }
    return values
  })
  for (const [column, count] of clamped)
    notices.add({ detail: `${column.header}: ${count} values just out of range, taken as its end`, line: column.line })
  for (const detail of empty) notices.add({ detail })
  return perPlace
}

function direction(row: CsvRow, column: FoundColumn, readCell: ReturnType<typeof cellReader>): number | null {
  const letters = row.cells[column.index].toUpperCase()
  const point = isMissing(letters) ? -1 : COMPASS.indexOf(letters)
  if (point >= 0) return point * 22.5
  return NO_DIRECTION.has(letters) ? null : readCell(row, column, skyRange('windFromDeg'))
}

/** What a place must have so that a day can be reckoned, by name and the line where its rows start. */
export function checkPlace(group: PlaceRows, values: Values, columns: ValueColumns, problems: ProblemList): void {
  const line = group.rows[0].line
  const need = (field: SkyColumn, detail: string) =>
    problems.add({ field, detail: `expected ${detail} (${group.place.name})`, line, column: 1 })
  if (values.airTempC === undefined) need('airTempC', 'a column with air temperatures')
  const hasLight = values.cloudPct ?? values.ghiWm2 ?? (values.dniWm2 && values.dhiWm2)
  if (hasLight === undefined) need('cloudPct', 'a column with cloud cover, or GHI, or DNI and DHI')
  if (values.windMps !== undefined && values.windFromDeg === undefined)
    need('windFromDeg', 'a column with the direction that the wind comes from, beside its speed')
  for (const [low, high] of PAIRS)
    checkPair(group, [values[low], values[high]], [columns.get(low), columns.get(high)], problems)
}

const PAIRS: [SkyValue, SkyValue][] = [
  ['ghiP10Wm2', 'ghiP90Wm2'],
  ['cloudP10Pct', 'cloudP90Pct'],
  ['windP10Mps', 'windP90Mps'],
]

type Both<T> = [T | undefined, T | undefined]

/** P10 is the low end here; some tables mean by P90 what is exceeded 9 times in 10. */
function checkPair(
  group: PlaceRows,
  [low, high]: Both<(number | null)[]>,
  pair: Both<FoundColumn>,
  problems: ProblemList,
) {
  if (low === undefined || high === undefined || pair[0] === undefined) return
  const i = low.findIndex((value, row) => value !== null && value > (high[row] ?? Infinity))
  if (i < 0) return
  const row = group.rows[i]
  problems.add({
    field: pair[0].header,
    value: shownValue(row.cells[pair[0].index]),
    detail: 'expected at most the P90 of the row: P10 is the low end, exceeded 9 times in 10',
    line: row.line,
    column: row.columns[pair[0].index],
  })
}
