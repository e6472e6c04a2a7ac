import { z } from 'zod'
import { forecastDocuments, forecastRequest } from '../documents/forecast.ts'
import { carDocument } from '../documents/car.ts'
import type { LearnedLosses } from '../documents/learned.ts'
import { pointingDocuments } from '../documents/pointing-day.ts'
import { date, slug } from '../documents/quantity.ts'
import { raceDocument } from '../documents/race.ts'
import { routeDocument } from '../documents/route.ts'
import { skyDocument } from '../documents/sky.ts'
import { speedsDocument } from '../documents/speeds.ts'
import { type TrackerDaysDocument, trackerDaysOf } from '../documents/tracker-days.ts'
import { fitting } from './fitting.ts'
import { fingerprint } from './fingerprint.ts'
import { checked, readJson } from './read-json.ts'

/** A document that is stored already. */
export const storedReference = (what: string) => z.strictObject({ id: slug(`a stored ${what}`) })

export type Reference = z.output<ReturnType<typeof storedReference>>

/** A forecast request whose documents stand in it or are named by their ids. */
export const openRequest = z
  .strictObject({
    car: z.union([carDocument, storedReference('car')]),
    race: z.union([raceDocument, storedReference('race')]),
    sky: z.union([skyDocument, storedReference('sky')]),
    routes: z
      .record(slug('id of a route that a stage names'), routeDocument)
      .describe('routes by id; those that are not given are taken from the store')
      .optional(),
    speeds: speedsDocument,
    date: date('the one day wanted; earlier days are still worked out for its opening').optional(),
    from: forecastRequest.shape.from,
    until: forecastRequest.shape.until,
  })
  .meta({ title: 'Forecast request' })

export type OpenRequest = z.output<typeof openRequest>

/** The forecast request in a body, checked; documents that it only names are left as `{ id }`. */
export const readForecastRequest = (input: { bytes: Uint8Array }): OpenRequest =>
  readOpenRequest(openRequest, input.bytes, 'forecast request')

/** A request in a body, checked by a schema with car, race and sky in it, each whole or named. */
export function readOpenRequest<S extends z.ZodObject>(schema: S, bytes: Uint8Array, what: string): z.output<S> {
  const body = readJson(bytes)
  const whole = {
    car: meant(body, 'car', carDocument),
    race: meant(body, 'race', raceDocument),
    sky: meant(body, 'sky', skyDocument),
  }
  return checked(schema.extend(whole), body, what) as z.output<S>
}

/** A union would name the problems of both its sides; which one is meant shows at a glance. */
export function meant<W extends z.ZodType>(body: unknown, name: string, whole: W, kind = name) {
  const given = member(body, name)
  const isReference = member(given, 'id') !== undefined && member(given, 'name') === undefined
  return isReference ? storedReference(kind) : whole
}

/** A field of something that may be an object. */
export const member = (value: unknown, name: string): unknown =>
  typeof value === 'object' && value !== null ? Object.entries(value).find(([key]) => key === name)?.[1] : undefined

/** Whole documents of a forecast; they were checked when they came in, perhaps by an earlier version. */
export interface ForecastInputs {
  car: unknown
  race: unknown
  routes: Record<string, unknown>
  sky: unknown
  speeds: unknown
  date?: string
  from?: unknown
  until?: unknown
  /** Losses by tracker as its readings show them; left out where nothing was learned. */
  learned?: LearnedLosses
}

/**
 * The budget of whole documents, as JSON.
 *
 * @throws Fault 'invalid-document', or 'cannot-forecast' where the documents do not fit together
 */
export function forecastJson(input: ForecastInputs): string {
  const request = checked(forecastRequest, input, 'forecast request')
  return fitting(() => JSON.stringify(forecastDocuments(request)))
}

/**
 * The tracker report of whole documents.
 *
 * @throws Fault as forecastJson
 */
export function trackerDaysJob(input: ForecastInputs): TrackerDaysDocument {
  const request = checked(forecastRequest, input, 'forecast request')
  return fitting(() => trackerDaysOf(request))
}

/**
 * Where to point the array on the days of whole documents, as JSON.
 *
 * @throws Fault as forecastJson
 */
export function pointingJson(input: ForecastInputs): string {
  const request = checked(forecastRequest, input, 'forecast request')
  return fitting(() => JSON.stringify(pointingDocuments(request)))
}

/** One hash over the content of everything that a forecast is made from. */
export const inputsHash = (input: ForecastInputs): string =>
  fingerprint({
    car: input.car,
    race: input.race,
    routes: input.routes,
    sky: input.sky,
    speeds: input.speeds,
    date: input.date,
    from: input.from,
    until: input.until,
    learned: input.learned,
  })
