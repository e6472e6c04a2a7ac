import { z } from 'zod'
import { readJson, checked } from '../compute/read-json.ts'
import { budgetDocument } from '../documents/budget.ts'
import { forecastRequest } from '../documents/forecast.ts'
import { campDocument, hereDocument } from '../documents/here.ts'
import { date, slug } from '../documents/quantity.ts'
import { speedsDocument } from '../documents/speeds.ts'
import { Fault } from '../errors.ts'
import { answers, COMPUTE_ERRORS, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, type Needs, SPEEDS_LIMIT } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { findRace } from './find.ts'
import { idParam } from './kinds.ts'
import { gather, makeForecast } from './make-forecast.ts'

const newForecast = z
  .strictObject({
    carId: slug('id of a stored car'),
    skyId: slug('id of a stored sky'),
    speeds: speedsDocument,
    date: date('the one day wanted; earlier days are still worked out for its opening').optional(),
    from: forecastRequest.shape.from,
    until: forecastRequest.shape.until,
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
  from: hereDocument.nullable().describe('where in the middle of a day it begins'),
  until: campDocument.nullable().describe('where it ends before its road does'),
  inputsHash: z
    .string()
    .describe('SHA-256 over the canonical JSON of documents, speeds, date, from, until and what readings show'),
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

function makeRoute(api: Api, needs: Needs): void {
  const schema = {
    tags: ['forecasts'],
    summary: 'Forecast a race with a stored car and sky',
    description:
      'The same inputs and engine give the forecast that is stored already. Trackers lose what the race’s readings show.',
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
    const gathered = await gather(needs, request.params.id, wanted)
    const { forecast, isNew } = await makeForecast(needs, gathered, wanted, clientGone(reply))
    return reply
      .code(isNew ? 201 : 200)
      .header('location', `/api/v1/forecasts/${forecast.id}`)
      .send(forecast)
  })
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
    const forecast = await store.forecasts.text(params.id)
    if (forecast === null) throw new Fault('no-such-forecast', `There is no forecast ${params.id}.`)
    const tag = `"${forecast.id}"`
    reply.header('etag', tag).header('cache-control', 'private, max-age=31536000, immutable')
    const isKnown = headers['if-none-match']?.split(',').some((known) => known.trim().replace(/^W\//, '') === tag)
    return isKnown === true ? reply.code(304).send() : forecast
  })
}
