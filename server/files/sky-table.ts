import { z } from 'zod'
import { instant, label, quantity } from '../documents/quantity.ts'
import { SKY_BOUNDS, SKY_COLUMNS, averaging, skyDocument, skySource } from '../documents/sky.ts'
import type { SkyColumn } from '../documents/sky.ts'
import { DELIMITERS } from './csv-table.ts'
import type { FieldSpec } from './header.ts'

const PLACING = ['time', 'date', 'hour', 'placeName', 'latDeg', 'lonDeg', 'elevationM'] as const
const VALUES = [...SKY_COLUMNS, ...SKY_BOUNDS] as const
export type SkyValue = (typeof VALUES)[number]

const TIME = ['time', 'timestamp', 'datetime', 'date time', 'date and time', 'valid time', 'local time', 'time local']
const UTC_TIME = ['utc', 'utc time', 'time utc', 'datetime utc', 'timestamp utc', 'date time utc']
const CLOUD = ['cloud', 'clouds', 'cloud cover', 'cloudcover', 'cloudiness', 'total cloud', 'total cloud cover']
const GHI = ['ghi', 'global', 'global horizontal', 'global horizontal irradiance', 'global horizontal radiation']
const TEMPERATURE = ['air temp', 'air temperature', 'temp', 'temperature', 't', 'ta', 't air', 'tair', 't2m']
const WIND = ['wind', 'wind speed', 'windspeed', 'mean wind speed', 'ws', 'wspd', 'ff', 'wind velocity']
const withBound = (names: string[], bound: string) => names.flatMap((name) => [`${name} ${bound}`, `${bound} ${name}`])

const text = (field: string, names: string[], variant?: string): FieldSpec => ({
  field,
  kind: field === 'placeName' ? 'text' : 'time',
  names,
  bare: 'take',
  variant,
})

/** Every column that a weather table may have, with the names it goes by. */
export const SKY_SPECS: FieldSpec[] = [
  text('time', [...TIME, 'at']),
  text('time', UTC_TIME, 'UTC'),
  text('date', ['date', 'day', 'local date', 'date local']),
  text('date', ['date utc', 'utc date'], 'UTC'),
  text('hour', ['hour', 'hh', 'hour of day', 'time of day', 'clock', 'hour ending', 'local hour']),
  text('hour', ['hour utc', 'utc hour'], 'UTC'),
  text('placeName', ['place', 'place name', 'station', 'station name', 'location', 'site', 'name', 'town']),
  { field: 'latDeg', kind: 'latitude', names: ['lat', 'latitude'], bare: 'take' },
  { field: 'lonDeg', kind: 'longitude', names: ['lon', 'lng', 'long', 'longitude'], bare: 'take' },
  {
    field: 'elevationM',
    kind: 'height',
    names: ['elevation', 'elev', 'ele', 'alt', 'altitude', 'height'],
    bare: 'say',
  },
  {
    field: 'cloudPct',
    kind: 'cloud',
    names: [...CLOUD, 'sky cover', 'total sky cover', 'cloud amount', 'tcc'],
    bare: 'refuse',
  },
  {
    field: 'ghiWm2',
    kind: 'irradiance',
    names: [...GHI, 'global irradiance', 'global radiation', 'shortwave', 'shortwave radiation', 'solar radiation'],
    bare: 'refuse',
  },
  {
    field: 'dniWm2',
    kind: 'irradiance',
    names: ['dni', 'direct normal', 'direct normal irradiance', 'direct normal radiation', 'beam normal irradiance'],
    bare: 'refuse',
  },
  {
    field: 'dhiWm2',
    kind: 'irradiance',
    names: [
      'dhi',
      'diffuse',
      'diffuse horizontal',
      'diffuse horizontal irradiance',
      'diffuse horizontal radiation',
      'diffuse irradiance',
      'diffuse radiation',
    ],
    bare: 'refuse',
  },
  {
    field: 'airTempC',
    kind: 'temperature',
    names: [...TEMPERATURE, 'dry bulb', 'dry bulb temperature'],
    heightM: 2,
    bare: 'refuse',
  },
  {
    field: 'humidityPct',
    kind: 'humidity',
    names: ['humidity', 'rh', 'relative humidity', 'rel humidity'],
    heightM: 2,
    bare: 'refuse',
  },
  {
    field: 'dewPointC',
    kind: 'temperature',
    names: ['dew point', 'dewpoint', 'dew', 'dew point temperature', 'dewpoint temperature', 'td', 'd2m'],
    heightM: 2,
    bare: 'refuse',
  },
  { field: 'windMps', kind: 'windSpeed', names: WIND, heightM: 10, bare: 'refuse' },
  {
    field: 'gustMps',
    kind: 'windSpeed',
    names: ['gust', 'gusts', 'wind gust', 'wind gusts', 'windgust', 'gust speed', 'wind gust speed', 'max gust'],
    heightM: 10,
    bare: 'refuse',
  },
  {
    field: 'windFromDeg',
    kind: 'direction',
    names: [
      'wind direction',
      'wind dir',
      'winddirection',
      'winddir',
      'wind from',
      'wind direction from',
      'wind from direction',
      'direction from',
      'wd',
      'wdir',
      'dd',
    ],
    heightM: 10,
    bare: 'take',
  },
  {
    field: 'pressureHpa',
    kind: 'pressure',
    names: ['station pressure', 'surface pressure', 'pressure station', 'pressure at station', 'qfe'],
    bare: 'refuse',
    variant: 'station',
  },
  {
    field: 'pressureHpa',
    kind: 'pressure',
    names: ['sea level pressure', 'mean sea level pressure', 'pressure msl', 'msl pressure', 'mslp', 'slp', 'qff'],
    bare: 'refuse',
    variant: 'sea-level',
  },
  { field: 'pressureHpa', kind: 'pressure', names: ['pressure', 'air pressure', 'pres', 'barometer'], bare: 'refuse' },
  {
    field: 'turbidity',
    kind: 'turbidity',
    names: ['turbidity', 'linke', 'linke turbidity', 'linke turbidity factor', 'tl'],
    bare: 'take',
  },
  { field: 'ghiP10Wm2', kind: 'irradiance', names: withBound(GHI, 'p10'), bare: 'refuse' },
  { field: 'ghiP90Wm2', kind: 'irradiance', names: withBound(GHI, 'p90'), bare: 'refuse' },
  { field: 'cloudP10Pct', kind: 'cloud', names: withBound(CLOUD, 'p10'), bare: 'refuse' },
  { field: 'cloudP90Pct', kind: 'cloud', names: withBound(CLOUD, 'p90'), bare: 'refuse' },
  { field: 'windP10Mps', kind: 'windSpeed', names: withBound(WIND, 'p10'), bare: 'refuse' },
  { field: 'windP90Mps', kind: 'windSpeed', names: withBound(WIND, 'p90'), bare: 'refuse' },
]

const BASE_OF: Record<(typeof SKY_BOUNDS)[number], SkyColumn> = {
  ghiP10Wm2: 'ghiWm2',
  ghiP90Wm2: 'ghiWm2',
  cloudP10Pct: 'cloudPct',
  cloudP90Pct: 'cloudPct',
  windP10Mps: 'windMps',
  windP90Mps: 'windMps',
}

const isBound = (field: SkyValue): field is keyof typeof BASE_OF => Object.hasOwn(BASE_OF, field)

/** The column itself, or the one that a bound belongs to; both share one convention. */
export const baseOf = (field: SkyValue): SkyColumn => (isBound(field) ? BASE_OF[field] : field)

/** Columns whose light moves with the sun inside an interval, so that what a stamp speaks for must be stated. */
export const LIGHT = new Set<SkyColumn>(['ghiWm2', 'dniWm2', 'dhiWm2', 'cloudPct'])

const place = z.strictObject({
  name: label('name of the place'),
  latDeg: quantity(-90, 90, 'latitude, north positive [°]'),
  lonDeg: quantity(-180, 180, 'longitude, east positive [°]'),
  elevationM: quantity(-500, 9000, 'height that the values hold for [m]'),
})

/** What a person says about a weather table that the table may not say itself. */
export const skyTableOptions = z
  .strictObject({
    name: label('name of the sky'),
    source: skySource,
    issuedAt: instant('when the forecast was issued or the measurement read'),
    utcOffset: skyDocument.shape.utcOffset.unwrap().optional(),
    place: place.optional().describe('the one place of a table without place columns'),
    averaging: z
      .strictObject({
        default: averaging.optional().describe('for every column of which nothing else is said'),
        perColumn: z.partialRecord(z.enum(SKY_COLUMNS), averaging).optional(),
      })
      .optional()
      .describe('what a stamp speaks for; goes before what the headers say'),
    pressureIs: skyDocument.shape.pressureIs.unwrap().optional(),
    columns: z
      .partialRecord(z.enum([...PLACING, ...VALUES]), z.string().max(200))
      .optional()
      .describe('header by field'),
    units: z
      .partialRecord(z.enum([...PLACING, ...VALUES]), z.string().max(40))
      .optional()
      .describe('unit by field'),
    delimiter: z.enum(DELIMITERS).optional().describe('what parts the columns; found by itself when left out'),
    decimal: z.enum(['.', ',']).optional().describe('decimal sign; found by itself when left out'),
  })
  .meta({ title: 'Weather table options' })

export type SkyTableOptions = z.input<typeof skyTableOptions>

const placeShape = skyDocument.shape.places.element.shape

/** What a column may hold, as the sky document has it. */
export const skyRange = (field: SkyValue): z.ZodNumber => placeShape[field].unwrap().element.unwrap()

export const PLACE_RANGES = {
  latDeg: placeShape.latDeg,
  lonDeg: placeShape.lonDeg,
  elevationM: placeShape.elevationM,
}

export const isSkyValue = (field: string): field is SkyValue => VALUES.some((known) => known === field)
