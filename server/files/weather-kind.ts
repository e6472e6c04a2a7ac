import { shownValue } from '../documents/problem.ts'
import type { Problem } from '../documents/problem.ts'
import { looksLike } from './decode-text.ts'

/** Kinds of file that a sky is read from. */
export const WEATHER_FILES = ['table', 'epw', 'tmy3'] as const
export type WeatherFile = (typeof WEATHER_FILES)[number]

const NAMES = {
  epw: 'an EPW weather file, whose first line starts with LOCATION',
  tmy3: 'a TMY3 weather file, whose second line starts with "Date (MM/DD/YYYY),Time (HH:MM)"',
  table: 'a weather table with a first line of headers',
  gpx: 'a GPX track',
  unknown: 'none of the known kinds of file',
}

/** What a text is by its first two lines. */
export function weatherFile(text: string): keyof typeof NAMES {
  const [first, second = ''] = text
    .slice(0, 65_536)
    .replace(/^\uFEFF/, '')
    .split(/\r\n|\r|\n/, 2)
  if (/^\s*"?LOCATION"?\s*,/i.test(first)) return 'epw'
  if (/^\s*"?Date \(MM\/DD\/YYYY\)"?\s*,\s*"?Time \(HH:MM\)/i.test(second)) return 'tmy3'
  const kind = looksLike(text)
  return kind === 'csv' ? 'table' : kind
}

/** The problem of a file of another kind than meant, in words; null where it may be meant. */
export function wrongKind(text: string, wanted: WeatherFile): Problem | null {
  const found = weatherFile(text)
  const isReadable = WEATHER_FILES.some((kind) => kind === found)
  if (found === wanted || (wanted === 'table' && !isReadable)) return null
  return {
    field: 'file',
    value: shownValue(
      text
        .slice(0, 200)
        .replace(/^\uFEFF/, '')
        .split(/[\r\n]/, 1)[0],
    ),
    detail: `expected ${NAMES[wanted]}; this is ${NAMES[found]}${isReadable ? `: read it with fileKind "${found}"` : ''}`,
    line: 1,
    column: 1,
  }
}
