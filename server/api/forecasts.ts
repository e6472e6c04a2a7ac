import { createHash } from 'node:crypto'
import { z } from 'zod'
import { readJson, checked } from '../compute/read-json.ts'
import { budgetDocument } from '../documents/budget.ts'
import { date, slug } from '../documents/quantity.ts'
import { speedsDocument } from '../documents/speeds.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { Fault } from '../errors.ts'
import type { NewForecast, StoredForecast } from '../store/forecast-store.ts'
import { answers, COMPUTE_ERRORS, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, type Needs, SPEEDS_LIMIT } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { findRace } from './find.ts'
import { named, routesOf } from './gather.ts'
import { idParam } from './kinds.ts'

const newForecast = z
  .strictObject({
    carId: slug('id of a stored car'),
    skyId: slug('id of a stored sky'),
    speeds: speedsDocument,
    date: date('the one day wanted; earlier days are still worked out for its opening').optional(),
  })
  .meta({ title: 'New forecast' })

const version = (of: string) => z.int().describe(`version of the ${of} that was used`)

const forecastEntry = z.strictObject({
  id: z.string(),
  createdAt: z.string().describe('instant (ISO 8601, UTC)'),
  raceId: z.string(),
  raceVersion: version('race'),
  carId: z.string(),
  carVersion: version('car'),
  skyId: z.string(),
  skyVersion: version('sky'),
  routeVersions: z.record(z.string(), version('route')),
  speeds: speedsDocument,
  inputsHash: z.string().describe('SHA-256 over the canonical JSON of documents, speeds and date'),
  engineVersion: z.string(),
})
const forecastAnswer = forecastEntry.extend({ budget: budgetDocument })

const noQuery = z.strictObject({})

/** Forecasts of stored documents: made once for the same inputs, kept, never changed. */
export function forecastRoutes(api: Api, needs: Needs): void {
  takeBodies(api, ['json'])
  makeRoute(api, needs)
  listRoute(api, needs)
  getRoute(api, needs)
}

function makeRoute(api: Api, { store, compute }: Needs): void {
  const schema = {
    tags: ['forecasts'],
    summary: 'Forecast a race with a stored car and sky',
    description: 'The same inputs and engine give the forecast that is stored already.',
    params: idParam('race'),
    querystring: noQuery,
    body: newForecast,
    response: answers(
      {
        200: { description: 'this forecast was made before', schema: forecastAnswer },
        201: { description: 'made; Location is its address', schema: forecastAnswer },
      },
      [
        'bad-id',
        'bad-query',
        'bad-json',
        'empty-body',
        'invalid-document',
        'no-such-document',
        'missing-document',
        'missing-route',
        'cannot-forecast',
        ...WRITE_ERRORS,
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.post('/races/:id/forecasts', { schema, bodyLimit: SPEEDS_LIMIT }, async (request, reply) => {
    const wanted = checked(newForecast, readJson(bytesOf(request.body)), 'forecast request')
    const { documents, used } = await gather(store, request.params.id, wanted)
    const signal = clientGone(reply)
    const inputs = { ...documents, speeds: wanted.speeds, date: wanted.date }
    const inputsHash = await compute.run('inputs-hash', inputs, signal)
    const made = { ...used, speeds: wanted.speeds, inputsHash, engineVersion: ENGINE_VERSION }
    const id = idOf(made)
    reply.header('location', `/api/v1/forecasts/${id}`)
    const before = await store.forecasts.get(id)
    if (before !== null) return before
    const budget: unknown = JSON.parse(await compute.run('forecast', inputs, signal))
    const { createdAt } = await store.forecasts.save({ id, ...made, budget })
    return reply.code(201).send({ id, createdAt, ...made, budget } satisfies StoredForecast)
  })
}

async function gather(store: Needs['store'], raceId: string, wanted: z.output<typeof newForecast>) {
  const { stored, race } = await findRace(store, raceId)
  const [car, sky, routes] = await Promise.all([
    named(store, 'car', wanted.carId, 'carId'),
    named(store, 'sky', wanted.skyId, 'skyId'),
    routesOf(store, race, {}),
  ])
  const bodies = Object.fromEntries([...routes].map(([id, route]) => [id, route.body]))
  return {
    documents: { car: car.body, race: stored.body, sky: sky.body, routes: bodies },
    used: {
      raceId,
      raceVersion: stored.version,
      carId: car.id,
      carVersion: car.version,
      skyId: sky.id,
      skyVersion: sky.version,
      routeVersions: Object.fromEntries([...routes].map(([id, route]) => [id, route.version])),
    },
  }
}

/** A UUID (version 8, RFC 9562) made of what the forecast is made of, so that a repeat finds it. */
function idOf(made: Omit<NewForecast, 'budget'>): string {
  const { raceId, raceVersion, carId, carVersion, skyId, skyVersion, routeVersions, inputsHash, engineVersion } = made
  const routes = Object.entries(routeVersions).sort(([a], [b]) => (a < b ? -1 : 1))
  const parts = [raceId, raceVersion, carId, carVersion, skyId, skyVersion, routes, inputsHash, engineVersion]
  const hex = createHash('sha256').update(JSON.stringify(parts)).digest('hex')
  const variant = '89ab'[Number.parseInt(hex[16], 16) % 4]
  return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-8${hex.slice(13, 16)}-${variant}${hex.slice(17, 20)}-${hex.slice(20, 32)}`
}

function listRoute(api: Api, { store }: Needs): void {
  const schema = {
    tags: ['forecasts'],
    summary: 'List the last 50 forecasts of a race, newest first, without their budgets',
    params: idParam('race'),
    querystring: noQuery,
    response: answers({ 200: { description: 'its forecasts', schema: listOf(forecastEntry) } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/forecasts', { schema }, async ({ params }) => {
    await findRace(store, params.id)
    return { items: await store.forecasts.list(params.id) }
  })
}

function getRoute(api: Api, { store }: Needs): void {
  const schema = {
    tags: ['forecasts'],
    summary: 'Get a forecast; it never changes',
    params: z.strictObject({ id: z.uuid({ error: 'a UUID' }).describe('the forecast’s id') }),
    querystring: noQuery,
    response: answers(
      { 200: { description: 'the forecast', schema: forecastAnswer }, 304: { description: 'it never changes' } },
      ['bad-id', 'bad-query', 'no-such-forecast', ...STORE_ERRORS],
    ),
  }
  api.get('/forecasts/:id', { schema }, async ({ params, headers }, reply) => {
    const forecast = await store.forecasts.get(params.id)
    if (forecast === null) throw new Fault('no-such-forecast', `There is no forecast ${params.id}.`)
    const tag = `"${forecast.id}"`
    reply.header('etag', tag).header('cache-control', 'private, max-age=31536000, immutable')
    const isKnown = headers['if-none-match']?.split(',').some((known) => known.trim().replace(/^W\//, '') === tag)
    return isKnown === true ? reply.code(304).send() : forecast
  })
}
