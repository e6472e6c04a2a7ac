import { shownValue } from '../documents/problem.ts'
import type { SkyColumn, SkyDocument } from '../documents/sky.ts'
import type { FoundColumn } from './columns.ts'
import type { NoticeList, ProblemList } from './file-reading.ts'
import type { Averaging } from './header.ts'
import { LIGHT, baseOf } from './sky-table.ts'
import type { SkyValue } from './sky-table.ts'

export interface AveragingWishes {
  default?: Averaging
  perColumn?: Partial<Record<SkyColumn, Averaging>>
}

type Conventions = Partial<Record<SkyColumn, Averaging>>

/**
 * What each column's stamps speak for: as the options say for the column, else its header, else the options' default.
 * P10 and P90 go with their column.
 * Light and cloud without any of these are problems, since an hour's shift of the sun is no small error; other columns
 * are taken as of the instant.
 */
export function conventions(
  columns: Map<SkyValue, FoundColumn>,
  wishes: AveragingWishes,
  found: { problems: ProblemList; notices: NoticeList },
): Conventions {
  const result: Conventions = {}
  const basesFirst = [...columns].sort(([a], [b]) => Number(baseOf(a) !== a) - Number(baseOf(b) !== b))
  for (const [field, column] of basesFirst) {
    const base = baseOf(field)
    const wished = wishes.perColumn?.[base]
    const place = { line: column.line, column: column.column }
    if (wished !== undefined && column.convention !== undefined && wished !== column.convention)
      found.notices.add({ detail: `${column.header}: taken as ${wished}, as wished`, ...place })
    const convention =
      wished ?? column.convention ?? result[base] ?? wishes.default ?? (LIGHT.has(base) ? undefined : 'instant')
    const problem = convention === undefined ? unstated(base) : doubt(convention, result[base], column)
    if (problem !== null)
      found.problems.add({ field: base, value: shownValue(column.header), detail: problem, ...place })
    if (convention !== undefined) result[base] ??= convention
  }
  return result
}

const unstated = (field: SkyColumn): string =>
  `expected what its stamps speak for: in the header, like "GHI (W/m2, preceding hour)", or with averaging: { default: "preceding" } or { perColumn: { ${field}: "following" } }; also "instant"`

function doubt(convention: Averaging, before: Averaging | undefined, column: FoundColumn): string | null {
  if (before !== undefined && before !== convention)
    return `expected one convention for a column and its P10 and P90, found ${before} and ${convention}`
  if (convention === 'instant' && column.unit?.isPerInterval === true)
    return `expected "preceding" or "following": ${column.unit.name} is an energy of an interval, not of an instant`
  return null
}

/** Whether pressure holds at the place or at sea level: as wished, or as the header says; a bare "pressure" says neither. */
export function pressureIs(
  column: FoundColumn | undefined,
  wished: SkyDocument['pressureIs'] | undefined,
  problems: ProblemList,
): SkyDocument['pressureIs'] {
  if (column === undefined) return wished ?? 'station'
  const said = [column.spec.variant, ...column.notes].map((note) => PRESSURE_WORDS[(note ?? '').toLowerCase()])
  const stated = said.find((word) => word !== undefined)
  const detail =
    stated === undefined
      ? 'expected whether it holds at the station or at sea level: in the header, like "station pressure (hPa)", or with pressureIs: "station" or "sea-level"'
      : `expected pressureIs: "${stated}", as its header says`
  if (stated === undefined ? wished === undefined : wished !== undefined && wished !== stated)
    problems.add({
      field: 'pressureHpa',
      value: shownValue(column.header),
      detail,
      line: column.line,
      column: column.column,
    })
  return stated ?? wished ?? 'station'
}

const PRESSURE_WORDS: Record<string, SkyDocument['pressureIs'] | undefined> = {
  station: 'station',
  qfe: 'station',
  'sea-level': 'sea-level',
  'sea level': 'sea-level',
  msl: 'sea-level',
}
