import { z } from 'zod'
import { type OpenRequest, openRequest, type Reference } from '../compute/forecast-jobs.ts'
import type { Kind } from '../compute/documents.ts'
import { budgetDocument } from '../documents/budget.ts'
import { raceDocument } from '../documents/race.ts'
import { trackerDays } from '../documents/tracker-days.ts'
import type { ErrorCode } from '../errors.ts'
import type { Store } from '../store/store.ts'
import { answers, COMPUTE_ERRORS, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { named, routesOf } from './gather.ts'
import { learnedLosses } from './make-forecast.ts'

/** Errors of every address that forecasts documents which come with the request. */
export const STATELESS_ERRORS: ErrorCode[] = [
  'bad-query',
  'bad-json',
  'empty-body',
  'invalid-document',
  'missing-document',
  'missing-route',
  'cannot-forecast',
  ...WRITE_ERRORS,
  ...COMPUTE_ERRORS,
  ...STORE_ERRORS,
]

/** A forecast of documents that come with the request, or are named in it; nothing is saved. */
export function statelessForecastRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['forecasts'],
    summary: 'Forecast whole documents; nothing is saved',
    description:
      'Each document stands in the body or is named as { "id": "…" }; routes not given come from the store. With car and race named, trackers lose what the race’s readings show.',
    querystring: z.strictObject({}),
    body: openRequest,
    response: answers({ 200: { description: 'the budget', schema: budgetDocument } }, STATELESS_ERRORS),
  }
  api.post('/forecast', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const read = await compute.run('read-forecast-request', { bytes: bytesOf(request.body) }, signal)
    const budget = await compute.run('forecast', await wholeRequest(needs, read, signal), signal)
    return reply.type('application/json; charset=utf-8').send(budget)
  })
}

/** The trackers of a car through the days of a race, of documents that come with the request; nothing is saved. */
export function statelessTrackerRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['forecasts'],
    summary: 'Report every tracker of a car through its days; nothing is saved',
    description:
      'Takes the same body as /forecast. Each day is driven again at 1 km/h less and more, and once a tracker as if that were dead; with a date only that day is.',
    querystring: z.strictObject({}),
    body: openRequest,
    response: answers({ 200: { description: 'the report', schema: trackerDays } }, STATELESS_ERRORS),
  }
  api.post('/tracker-report', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const read = await compute.run('read-forecast-request', { bytes: bytesOf(request.body) }, signal)
    return compute.run('report-tracker-days', await wholeRequest(needs, read, signal), signal)
  })
}

/**
 * The request with every document that it names.
 *
 * @param before  what stands before its fields in the body, for messages
 */
export async function wholeRequest(needs: Needs, request: OpenRequest, signal: AbortSignal, before = '') {
  const { store } = needs
  const [car, race, sky] = await Promise.all([
    documentOf(store, 'car', request.car, before),
    documentOf(store, 'race', request.race, before),
    documentOf(store, 'sky', request.sky, before),
  ])
  const given = request.routes ?? {}
  const stored = await routesOf(store, raceDocument.parse(race), given)
  const routes = { ...Object.fromEntries([...stored].map(([id, { body }]) => [id, body])), ...given }
  const learned = await learnedFor(needs, request, signal)
  const { speeds, date, from, until } = request
  return { car, race, sky, routes, speeds, date, from, until, learned }
}

/** Where car and race are stored, their readings count as in every forecast of that race. */
async function learnedFor(needs: Needs, { car, race }: OpenRequest, signal: AbortSignal) {
  if (!('id' in car) || !('id' in race)) return undefined
  return learnedLosses(needs, race.id, await named(needs.store, 'car', car.id, 'car.id'), signal)
}

const documentOf = async (store: Store, kind: Kind, given: object | Reference, before: string): Promise<unknown> =>
  'id' in given ? (await named(store, kind, given.id, `${before}${kind}.id`)).body : given
