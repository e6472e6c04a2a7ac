import { z } from 'zod'
import { instant, label, quantity } from './quantity.ts'
import { turbidityByMonth } from './turbidity.ts'

/** Most rows that one place of a sky may hold: 60 days of 15-minute values. */
export const MAX_SKY_ROWS = 6000

/** Longest time between two stamps: beyond it a forecast says nothing of the hours between. */
const MAX_SKY_GAP_MS = 6 * 3_600_000

const cells = (min: number, max: number, meaning: string) =>
  z.array(z.number().min(min).max(max).nullable()).max(MAX_SKY_ROWS).describe(meaning).optional()

const irradiance = (what: string) => cells(0, 1600, `${what} [W/m²]`)
const part = (what: string) => cells(0, 1500, `${what} [W/m²]`)

/** What a value speaks for: the time before its stamp, the time after it, or that moment. */
export const averaging = z
  .enum(['preceding', 'following', 'instant'])
  .describe('a stamp speaks for the interval before it, the interval after it, or that instant')

/** The columns a sky may have, each one value per stamp; null where a value is missing. */
const columns = {
  cloudPct: cells(0, 100, 'total cloud cover [%]'),
  ghiWm2: irradiance('global horizontal irradiance'),
  dniWm2: part('direct normal irradiance'),
  dhiWm2: part('diffuse horizontal irradiance'),
  airTempC: cells(-60, 60, 'air temperature at 2 m [°C]'),
  humidityPct: cells(0, 100, 'relative humidity [%]'),
  dewPointC: cells(-80, 45, 'dew point [°C]'),
  windMps: cells(0, 75, 'wind speed at 10 m [m/s]'),
  gustMps: cells(0, 120, 'gust speed at 10 m [m/s]'),
  windFromDeg: cells(0, 360, 'direction that the wind comes FROM, clockwise from north [°]'),
  pressureHpa: cells(400, 1100, 'air pressure; pressureIs says where it holds [hPa]'),
  turbidity: cells(1, 12, 'Linke turbidity'),
}

const bounds = {
  ghiP10Wm2: irradiance('global irradiance exceeded on 9 days in 10'),
  ghiP90Wm2: irradiance('global irradiance exceeded on 1 day in 10'),
  cloudP10Pct: cells(0, 100, 'cloud cover exceeded on 9 days in 10 [%]'),
  cloudP90Pct: cells(0, 100, 'cloud cover exceeded on 1 day in 10 [%]'),
  windP10Mps: cells(0, 75, 'wind speed exceeded on 9 days in 10 [m/s]'),
  windP90Mps: cells(0, 75, 'wind speed exceeded on 1 day in 10 [m/s]'),
}

export const SKY_COLUMNS = Object.keys(columns) as (keyof typeof columns)[]
export const SKY_BOUNDS = Object.keys(bounds) as (keyof typeof bounds)[]
export type SkyColumn = (typeof SKY_COLUMNS)[number]

const place = z
  .strictObject({
    name: label('name of the place'),
    latDeg: quantity(-90, 90, 'latitude, north positive [°]'),
    lonDeg: quantity(-180, 180, 'longitude, east positive [°]'),
    elevationM: quantity(-500, 9000, 'height that the values hold for [m]'),
    at: z.array(instant('stamp')).min(2).max(MAX_SKY_ROWS).describe('stamps, ascending, evenly spaced or not'),
    ...columns,
    ...bounds,
  })
  .superRefine((p, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    for (const name of [...SKY_COLUMNS, ...SKY_BOUNDS]) {
      const column = p[name]
      if (column !== undefined && column.length !== p.at.length)
        issue([name], `as many values as there are stamps (${p.at.length})`, column.length)
    }
    const late = p.at.findIndex((at, i) => i > 0 && Date.parse(at) <= Date.parse(p.at[i - 1]))
    if (late > 0) issue(['at', late], `later than the stamp before it (${p.at[late - 1]})`, p.at[late])
    const wide = p.at.findIndex((at, i) => i > 0 && Date.parse(at) - Date.parse(p.at[i - 1]) > MAX_SKY_GAP_MS)
    if (wide > 0) issue(['at', wide], `at most 6 h after the stamp before it (${p.at[wide - 1]})`, p.at[wide])
    for (const name of SKY_COLUMNS)
      if (p[name]?.every((value) => value === null)) issue([name], 'at least one value in the column', 'none')
    if (p.airTempC === undefined) issue(['airTempC'], 'a column of air temperatures [°C]', undefined)
    if (p.cloudPct === undefined && p.ghiWm2 === undefined && (p.dniWm2 === undefined || p.dhiWm2 === undefined))
      issue(['cloudPct'], 'cloud cover, or GHI, or DNI with DHI', undefined)
    if (p.windMps !== undefined && p.windFromDeg === undefined)
      issue(['windFromDeg'], 'a direction for every wind speed [°]', undefined)
    if (p.windFromDeg !== undefined && p.windMps === undefined)
      issue(['windMps'], 'a speed for every wind direction [m/s]', undefined)
    for (const [name, other] of [
      ['dniWm2', 'dhiWm2'],
      ['dhiWm2', 'dniWm2'],
    ] as const)
      if (p[name] !== undefined && p[other] === undefined && p.ghiWm2 === undefined)
        issue([name], `a second of ghiWm2, dniWm2 and dhiWm2 beside it`, 'alone')
    if (p.humidityPct !== undefined && isNeverWithTemperature(p.humidityPct, p.airTempC))
      issue(['humidityPct'], 'at least one value in a row with an air temperature', 'none')
    if (p.humidityPct !== undefined && p.dewPointC !== undefined)
      issue(['dewPointC'], 'humidity or dew point, not both', 'both')
  })

/** Humidity and pressure reduced to sea level mean something with the air temperature of their row only. */
const isNeverWithTemperature = (values: (number | null)[], airTempC: (number | null)[] | undefined): boolean =>
  values.every((value, i) => value === null || (airTempC?.[i] ?? null) === null)

/** Where the values of a sky come from. */
export const skySource = z
  .enum(['forecast', 'measured', 'typical'])
  .describe('whether these values were forecast or measured, or are those of a typical year')

/** Weather along the route: places × stamps. */
export const skyDocument = z
  .strictObject({
    name: label('name of the sky'),
    source: skySource,
    issuedAt: instant('when the forecast was issued or the measurement read'),
    utcOffset: z
      .string()
      .regex(/^[+-](?:0\d|1[0-4]):[0-5]\d$/, 'an offset as +HH:MM or -HH:MM')
      .describe('offset of the table that these values came from; stamps carry their own')
      .default('+00:00'),
    averaging: z
      .partialRecord(z.enum(SKY_COLUMNS), averaging)
      .default({})
      .describe('per column what its stamps speak for; irradiance and cloud: preceding, others: instant'),
    pressureIs: z
      .enum(['station', 'sea-level'])
      .default('station')
      .describe('whether pressureHpa holds at the height of the place or is reduced to sea level'),
    turbidityByMonth: turbidityByMonth.optional(),
    diffuse: z
      .enum(['perez', 'hay-davies'])
      .describe('how the light of the sky is spread over it: by Perez, or by Hay and Davies; perez where left out')
      .optional(),
    places: z.array(place).min(1).max(100),
  })
  .superRefine((sky, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    const { ghiWm2 = 'preceding', dhiWm2 = 'preceding' } = sky.averaging
    sky.places.forEach((p, i) => {
      if (p.ghiWm2 !== undefined && p.dhiWm2 !== undefined && p.dniWm2 === undefined && ghiWm2 !== dhiWm2)
        issue(['averaging', 'dhiWm2'], `the same as ghiWm2 (${ghiWm2}) where there is no dniWm2`, dhiWm2)
      if (sky.pressureIs !== 'sea-level' || p.pressureHpa === undefined) return
      if (isNeverWithTemperature(p.pressureHpa, p.airTempC))
        issue(['places', i, 'pressureHpa'], 'at least one value in a row with an air temperature', 'none')
    })
  })
  .meta({ title: 'Sky' })

export type SkyDocument = z.output<typeof skyDocument>
export type SkyInput = z.input<typeof skyDocument>
export type SkyPlace = SkyDocument['places'][number]
