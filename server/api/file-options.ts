import { z } from 'zod'
import type { Format } from '../compute/file-jobs.ts'
import type { Kind } from '../compute/documents.ts'
import { checkDocument } from '../documents/check.ts'
import { averaging } from '../documents/sky.ts'
import { counted, Fault } from '../errors.ts'
import { climateOptions } from '../files/climate-options.ts'
import { routeTableOptions } from '../files/route-table.ts'
import { skyTableOptions } from '../files/sky-table.ts'
import { WEATHER_FILES } from '../files/weather-kind.ts'

/** A number in a query. */
export const number = (min: number, max: number, meaning: string) =>
  z
    .string()
    .regex(/^-?\d{1,5}(?:\.\d{1,12})?$/, `a number from ${min} to ${max}`)
    .transform(Number)
    .refine((value) => value >= min && value <= max, `a number from ${min} to ${max}`)
    .describe(meaning)
    .optional()

// In a query a plus sign means a space, which no offset has.
const withPlus = (meaning: string) =>
  z
    .string()
    .max(60)
    .transform((text) => text.replace(' ', '+'))
    .describe(meaning)
    .optional()

/** Further options of a reader in a query. */
export const more = z
  .string()
  .max(20_000)
  .transform((text, context) => {
    try {
      const value: unknown = JSON.parse(text)
      if (typeof value === 'object' && value !== null && !Array.isArray(value)) return { ...value }
    } catch {
      // Said below.
    }
    context.addIssue({ code: 'custom', message: 'an object as JSON', input: text })
    return z.NEVER
  })
  .describe('more options as a JSON object, for example {"columns":{"latDeg":"Breite"}}')
  .optional()

const { name, delimiter, decimal } = routeTableOptions.shape

/** Query parameters of route files, as their readers' options. */
export const routeQuery = z
  .strictObject({ name, delimiter, decimal, options: more })
  .transform(({ options, ...rest }) => ({ ...options, ...rest }))

const { source, pressureIs, place } = skyTableOptions.shape

const { from, to } = climateOptions.shape

const fileKind = z
  .enum(WEATHER_FILES)
  .describe('what the text/csv body is: a weather table, or a typical year as EPW or TMY3; table where left out')

/** Query parameters of weather tables and of typical years, as their readers' options. */
export const skyQuery = z
  .strictObject({
    fileKind: fileKind.optional(),
    from: from.optional(),
    to: to.optional(),
    name: skyTableOptions.shape.name.optional(),
    source: source.optional(),
    issuedAt: withPlus('when the forecast was issued or the measurement read (ISO 8601 with offset)'),
    utcOffset: withPlus('offset of the table’s times, for example +02:00'),
    averaging: averaging.optional(),
    place: place.unwrap().shape.name.optional(),
    lat: number(-90, 90, 'latitude of the one place of the table [°]'),
    lon: number(-180, 180, 'longitude of the one place of the table [°]'),
    elevationM: number(-500, 9000, 'height of the one place of the table [m]'),
    pressureIs,
    delimiter,
    decimal,
    options: more,
  })
  .superRefine((query, context) => {
    const placing = ['lat', 'lon', 'elevationM'] as const
    const missing = placing.filter((key) => query[key] === undefined)
    if (missing.length === placing.length && query.place === undefined) return
    for (const key of missing)
      context.addIssue({ code: 'custom', path: [key], message: 'lat, lon and elevationM together', input: undefined })
  })
  .transform(({ options, lat, lon, elevationM, place, averaging, ...rest }) => ({
    ...options,
    ...rest,
    ...(averaging === undefined ? {} : { averaging: { default: averaging } }),
    ...(lat === undefined ? {} : { place: { name: place ?? 'Place', latDeg: lat, lonDeg: lon, elevationM } }),
  }))

const NONE = z.strictObject({})

/** The options of a sky's file by its kind; each says of which kind it is for. */
const SKY_OPTIONS = {
  table: skyTableOptions.extend({ fileKind: z.literal('table').optional() }),
  epw: climateOptions.safeExtend({ fileKind: z.literal('epw') }),
  tmy3: climateOptions.safeExtend({ fileKind: z.literal('tmy3') }),
}

function optionsOf(kind: Kind, format: Format, query: unknown): z.ZodType<Record<string, unknown>> {
  if (kind === 'route' && format === 'gpx') return z.strictObject({ name })
  if (kind === 'route' && format === 'csv') return routeTableOptions
  if (kind !== 'sky' || format !== 'csv') return NONE
  return SKY_OPTIONS[z.object({ fileKind: fileKind.default('table').catch('table') }).parse(query).fileKind]
}

/**
 * The options of a file's reader, checked for the format that the body has.
 *
 * @throws Fault 'bad-query' with every wrong or needless one
 */
export function readerOptions(kind: Kind, format: Format, query: unknown): Record<string, unknown> {
  const { document, problems } = checkDocument(optionsOf(kind, format, query), query)
  if (problems === undefined) return document
  const detail = `The options for reading this ${kind} have ${counted(problems.length, 'problem')}.`
  throw new Fault('bad-query', detail, { errors: problems })
}
