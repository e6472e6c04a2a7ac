import type { SkyDocument } from '../server/documents/sky.ts'
import type { ClimateOptions } from '../server/files/climate-options.ts'
import type { SkyTableOptions } from '../server/files/sky-table.ts'

/** What a person says about a weather table, as typed. */
export interface SkyForm {
  name: string
  source: 'forecast' | 'measured'
  /** Days of the race that a typical year shall stand for: 2026-10-16. */
  from: string
  to: string
  /** Local date and time: 2026-10-16T18:00. */
  issuedAt: string
  /** Offset of the table’s times; empty where they carry their own. */
  utcOffset: string
  /** Offset of this device, for the issue time where no other is said. */
  ownOffset: string
  averaging: '' | 'preceding' | 'following' | 'instant'
  pressureIs: '' | 'station' | 'sea-level'
  placeName: string
  latDeg: string
  lonDeg: string
  elevationM: string
  /** Field and unit by header, for columns said by hand. */
  columns: Record<string, { field: string; unit: string }>
}

/** Values that a column may hold, in the order in which they are offered. */
export const SKY_VALUES = [
  ['cloudPct', 'Cloud cover'],
  ['ghiWm2', 'Global irradiance'],
  ['dniWm2', 'Direct normal irradiance'],
  ['dhiWm2', 'Diffuse irradiance'],
  ['airTempC', 'Air temperature'],
  ['humidityPct', 'Humidity'],
  ['dewPointC', 'Dew point'],
  ['windMps', 'Wind speed'],
  ['gustMps', 'Gust'],
  ['windFromDeg', 'Wind direction, from'],
  ['pressureHpa', 'Pressure'],
  ['turbidity', 'Turbidity, Linke'],
] as const

/** Everything that a column may hold: values, and when and where they hold. */
export const SKY_FIELDS = [
  ['time', 'Date and time'],
  ['date', 'Date'],
  ['hour', 'Hour'],
  ...SKY_VALUES,
  ['placeName', 'Place'],
  ['latDeg', 'Latitude'],
  ['lonDeg', 'Longitude'],
  ['elevationM', 'Height of the place'],
] as const

const numberOf = (text: string): number => Number(text.replace(',', '.'))

/** +02:00 for 120. */
export function offsetName(minutes: number): string {
  const two = (value: number): string => String(value).padStart(2, '0')
  const size = Math.abs(minutes)
  return `${minutes < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`
}

/** A form for a file just chosen: named after it, issued now, for the days of the race. */
export function emptySky(fileName: string, nowMs: number, offsetMin: number, dates: string[]): SkyForm {
  const today = new Date(nowMs + offsetMin * 60_000).toISOString().slice(0, 10)
  return {
    name: fileName.replace(/\.[^.]+$/, '').slice(0, 80),
    source: 'forecast',
    from: dates[0] ?? today,
    to: dates[dates.length - 1] ?? today,
    issuedAt: new Date(nowMs + offsetMin * 60_000).toISOString().slice(0, 16),
    utcOffset: '',
    ownOffset: offsetName(offsetMin),
    averaging: '',
    pressureIs: '',
    placeName: '',
    latDeg: '',
    lonDeg: '',
    elevationM: '',
    columns: {},
  }
}

/** The reader’s options that a form describes; what is left empty is left to the table. */
export function skyOptions(form: SkyForm): SkyTableOptions {
  const said = Object.entries(form.columns).filter(([, column]) => column.field !== '')
  const units = said.filter(([, column]) => column.unit.trim() !== '')
  const entries = (pairs: [string, string][]): Record<string, string> => Object.fromEntries(pairs)
  return {
    name: form.name.trim() === '' ? 'Sky' : form.name.trim(),
    source: form.source,
    issuedAt: `${form.issuedAt}:00${form.utcOffset.trim() || form.ownOffset}`,
    ...(form.utcOffset.trim() === '' ? {} : { utcOffset: form.utcOffset.trim() }),
    ...(form.averaging === '' ? {} : { averaging: { default: form.averaging } }),
    ...(form.pressureIs === '' ? {} : { pressureIs: form.pressureIs }),
    ...placeOf(form),
    ...(said.length === 0 ? {} : { columns: entries(said.map(([header, { field }]) => [field, header])) }),
    ...(units.length === 0 ? {} : { units: entries(units.map(([, { field, unit }]) => [field, unit.trim()])) }),
  }
}

/** The options for a file of a typical year. */
export const yearOptions = (form: SkyForm): ClimateOptions => ({
  name: form.name.trim() === '' ? 'Typical year' : form.name.trim(),
  from: form.from,
  to: form.to,
})

function placeOf(form: SkyForm): Pick<SkyTableOptions, 'place'> {
  if ([form.latDeg, form.lonDeg, form.elevationM].every((text) => text.trim() === '')) return {}
  const [latDeg, lonDeg, elevationM] = [form.latDeg, form.lonDeg, form.elevationM].map(numberOf)
  return { place: { name: form.placeName.trim() === '' ? 'Place' : form.placeName.trim(), latDeg, lonDeg, elevationM } }
}

export interface SkyFacts {
  places: number
  from: string
  to: string
  columns: string[]
}

/** What a sky holds, in few words: places, span of stamps, columns. */
export function skyFacts({ places }: SkyDocument): SkyFacts {
  const stamps = places.flatMap((place) => place.at).sort((a, b) => Date.parse(a) - Date.parse(b))
  const columns = SKY_VALUES.filter(([field]) => places.some((place) => place[field] !== undefined))
  return {
    places: places.length,
    from: stamps[0],
    to: stamps[stamps.length - 1],
    columns: columns.map(([, text]) => text),
  }
}
