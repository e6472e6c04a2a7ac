import { z } from 'zod'
import { carDocument } from './car.ts'
import { forecastRequest } from './forecast.ts'
import { learnedLosses } from './learned.ts'
import { date, slug, zoneName } from './quantity.ts'
import { raceDocument } from './race.ts'
import { routeDocument } from './route.ts'
import { skyDocument, skySource } from './sky.ts'
import { speedsDocument } from './speeds.ts'

export const comparisonZone = zoneName(
  'time zone that hours and days are counted in; the race’s, or the offset of the first measured stamp, where left out',
)

/** Two skies, and the day that their difference is wanted for. */
export const comparisonRequest = z.strictObject({
  forecast: skyDocument,
  measured: skyDocument,
  zone: comparisonZone.optional(),
  day: z
    .strictObject({
      car: carDocument,
      race: raceDocument,
      routes: z.record(slug('id of a route that a stage names'), routeDocument),
      speeds: speedsDocument,
      date: date('the day'),
      from: forecastRequest.shape.from,
      until: forecastRequest.shape.until,
      learned: learnedLosses.optional(),
    })
    .optional(),
})

export type ComparisonRequest = z.output<typeof comparisonRequest>

/** What is compared: unit of each in its name, the clear-sky index a fraction of one clear sky. */
export const COMPARED = [
  'ghiWm2',
  'dniWm2',
  'dhiWm2',
  'clearSkyIndex',
  'airTempC',
  'windMps',
  'windAlongMps',
  'windAcrossMps',
  'pressureHpa',
] as const

const number = (meaning: string) => z.number().describe(meaning)
const at = (meaning: string) => z.string().describe(`${meaning} (ISO 8601, local offset)`)

const score = z.strictObject({
  id: z.enum(COMPARED).describe('what is compared; its unit stands in the name'),
  rows: number('rows that count'),
  forecastMean: number('mean of the forecast over them'),
  measuredMean: number('mean of what was measured over them'),
  bias: number('mean of forecast less measured'),
  meanAbsoluteError: number('mean size of the difference'),
  rms: number('root of the mean square of the difference'),
})

const scores = z.array(score)

const place = z.strictObject({
  name: z.string().describe('the measured place'),
  nearest: z
    .strictObject({ name: z.string(), km: number('how far it is [km]') })
    .describe('the place of the forecast that is nearest'),
  from: at('start of the first row'),
  to: at('end of the last row'),
  rows: number('rows of measured light, by night too'),
  scores,
  byHour: z
    .array(z.strictObject({ hour: number('local hour of the day, 0 to 23'), scores }))
    .describe('by the hour in which the middle of a row falls'),
  byLead: z
    .array(
      z.strictObject({
        fromH: number('from so long after the issue [h]'),
        toH: z.number().nullable().describe('to so long after it, null without end [h]'),
        scores,
      }),
    )
    .describe('by how long after the issue of the forecast; empty where it is no forecast'),
  days: z
    .array(
      z.strictObject({
        date: z.string(),
        hours: number('hours of measured rows, by night too [h]'),
        forecastWhm2: number('global irradiation as forecast [Wh/m²]'),
        measuredWhm2: number('global irradiation as measured [Wh/m²]'),
        ratio: z.number().nullable().describe('forecast over measured; null where nothing was measured'),
      }),
    )
    .describe('energy of each day, over the rows that were measured'),
})

const side = z.strictObject({
  cameInWh: number('income [Wh]'),
  wentOutWh: number('spendings [Wh]'),
  shortWh: number('asked of an empty pack [Wh]'),
  closingWh: number('closing balance [Wh]'),
  closingPct: number('closing charge [%]'),
  drivenKm: number('driven [km]'),
})

const worth = z.strictObject({
  date: z.string(),
  car: z.string(),
  openingPct: number('charge that both days open with, as the forecast has it [%]'),
  heldKmh: z.number().nullable().describe('one speed held in both, null where speeds differ [km/h]'),
  forecast: side,
  measured: side,
  lines: z.array(
    z.strictObject({
      id: z.string(),
      label: z.string(),
      side: z.enum(['income', 'spending', 'denied']),
      forecastWh: number('under the forecast [Wh]'),
      measuredWh: number('under what was measured [Wh]'),
      differenceWh: number('forecast less measured [Wh]'),
    }),
  ),
  closingWh: number('closing balance, forecast less measured: income less spendings, and what was short [Wh]'),
})

/** How far a forecast was from what was measured. */
export const skyComparison = z
  .strictObject({
    forecast: z.strictObject({ name: z.string(), source: skySource, issuedAt: z.string() }),
    measured: z.strictObject({ name: z.string(), source: skySource, issuedAt: z.string() }),
    zone: z.string(),
    places: z.array(place),
    notes: z.array(z.string()).describe('what was left out or worked out'),
    worth: worth.nullable().describe('what the difference is worth on the day chosen, null where none was'),
  })
  .meta({ title: 'Sky comparison' })

export type SkyComparison = z.output<typeof skyComparison>
export type ComparedScore = z.output<typeof score>
export type SkyWorth = NonNullable<SkyComparison['worth']>
