import { createHash } from 'node:crypto'
import { z } from 'zod'
import { carDocument } from '../documents/car.ts'
import { learnedLosses as learnedSchema } from '../documents/learned.ts'
import { slug } from '../documents/quantity.ts'
import { raceDocument } from '../documents/race.ts'
import { routeDocument } from '../documents/route.ts'
import { skyDocument } from '../documents/sky.ts'
import type { DocumentText } from '../store/document-store.ts'
import { JsonText } from '../store/json-text.ts'
import { answers, COMPUTE_ERRORS, STORE_ERRORS } from './answers.ts'
import { type Api, clientGone, type Needs } from './api.ts'
import { findText } from './find.ts'
import { namedText, routeTextsOf } from './gather.ts'
import { idParam } from './kinds.ts'
import { learnedLosses } from './make-forecast.ts'
import { etag } from './preconditions.ts'
import { serialized } from './serialized.ts'

const query = z.strictObject({ car: slug('id of a stored car'), sky: slug('id of a stored sky') })

const documents = z
  .strictObject({
    car: carDocument,
    race: raceDocument,
    routes: z.record(z.string(), routeDocument).describe('every route that a stage runs on, by id'),
    sky: skyDocument,
    learned: learnedSchema.describe('losses as the race’s readings show them').optional(),
  })
  .meta({ title: 'Race documents' })

/** All that a race's days are worked out from, in one answer, for devices that go on without the service. */
export function raceDocumentsRoute(api: Api, needs: Needs): void {
  const schema = {
    tags: ['races'],
    summary: 'Get a race with its car, sky and routes and what its readings show, as a forecast or plan takes them',
    description:
      'ETag changes when any of them does; If-None-Match with it answers 304. For devices that work the day out without contact.',
    params: idParam('race'),
    querystring: query,
    response: answers(
      { 200: { description: 'the documents', schema: documents }, 304: { description: 'none of them has changed' } },
      [
        'bad-id',
        'bad-query',
        'no-such-document',
        'missing-document',
        'missing-route',
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.get('/races/:id/documents', { schema }, async ({ params, query: of, headers }, reply) => {
    const { store } = needs
    const race = await findText(store, 'race', params.id)
    const [car, sky, routes] = await Promise.all([
      namedText(store, 'car', of.car, 'car'),
      namedText(store, 'sky', of.sky, 'sky'),
      routeTextsOf(store, raceDocument.parse(race.body.toJSON())),
    ])
    const learned = await learnedLosses(needs, race.id, { ...car, body: car.body.toJSON() }, clientGone(reply))
    const tag = etag(editionOf([race, car, sky, ...routes.values()], learned))
    reply.header('etag', tag).header('cache-control', 'private, no-cache')
    if (headers['if-none-match']?.replace(/^W\//, '') === tag) return reply.code(304).send()
    const roads = serialized(Object.fromEntries([...routes].map(([id, { body }]) => [id, body])))
    return { car: car.body, race: race.body, routes: new JsonText(roads), sky: sky.body, learned }
  })
}

/** One name for the versions of all documents and what was learned. */
function editionOf(documents: DocumentText[], learned: unknown): string {
  const versions = documents.map(({ id, version }) => [id, version])
  return createHash('sha256')
    .update(JSON.stringify([versions, learned]))
    .digest('hex')
    .slice(0, 32)
}
