import { z } from 'zod'
import { openRequest } from '../compute/forecast-jobs.ts'
import { pointingDocument } from '../documents/pointing.ts'
import { answers, COMPUTE_ERRORS, STORE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { dayParams, oneDay } from './days.ts'
import { findRace } from './find.ts'
import { followed } from './followed.ts'
import { inputsAgain } from './make-forecast.ts'
import { STATELESS_ERRORS, wholeRequest } from './stateless-forecast.ts'

const DESCRIPTION =
  'For each time that one pose is held: azimuth from true north, tilt from flat, what it brings at the strings and in the pack, what the array brings left flat, and what being off by up to 5, 10 and 20° costs. Lift and lower as the event’s rules say; mind the wind; keep clear of live array connectors: an array in light carries lethal direct voltage.'

/** Where to point the array, of documents that come with the request; nothing is saved. */
export function statelessPointingRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['forecasts'],
    summary: 'Tell where to point the array in every standing window; nothing is saved',
    description: `${DESCRIPTION} Takes the same body as /forecast; with a date only that day is told.`,
    querystring: z.strictObject({}),
    body: openRequest,
    response: answers({ 200: { description: 'poses and costs, day by day', schema: pointingDocument } }, [
      ...STATELESS_ERRORS,
    ]),
  }
  api.post('/pointing', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const read = await compute.run('read-forecast-request', { bytes: bytesOf(request.body) }, signal)
    const pointing = await compute.run('point', await wholeRequest(needs, read, signal), signal)
    return reply.type('application/json; charset=utf-8').send(pointing)
  })
}

const current = z.strictObject({
  forecastId: z.string(),
  madeAt: z.string().describe('when that forecast was made: instant (ISO 8601, UTC)'),
  pointing: pointingDocument,
})

/** Where to point the array on a day, by the budget that the crew follows. */
export function pointingRoute(api: Api, needs: Needs): void {
  const { store, compute } = needs
  const schema = {
    tags: ['following'],
    summary: 'Tell where to point the array on a day, by the budget that the crew follows',
    description: DESCRIPTION,
    params: dayParams,
    querystring: z.strictObject({}),
    response: answers({ 200: { description: 'poses and costs of the day', schema: current } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      'no-such-day',
      'nothing-followed',
      'invalid-document',
      'cannot-forecast',
      ...COMPUTE_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/days/:date/pointing', { schema }, async ({ params }, reply) => {
    const { id, date } = params
    oneDay((await findRace(store, id)).race, date)
    const { forecast } = await followed(store, id, date)
    const signal = clientGone(reply)
    const pointing = await compute.run('point', await inputsAgain(needs, forecast, date, signal), signal)
    reply.header('cache-control', 'no-cache')
    return { forecastId: forecast.id, madeAt: forecast.createdAt, pointing: JSON.parse(pointing) }
  })
}
