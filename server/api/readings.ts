import { z } from 'zod'
import { readingsBody } from '../compute/reading-jobs.ts'
import { judgementDocument } from '../documents/judgement.ts'
import { slug } from '../documents/quantity.ts'
import { keptReading } from '../documents/tracker-report.ts'
import { linkOf } from './access.ts'
import { answers, COMPUTE_ERRORS, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { findRace } from './find.ts'
import { moved } from './followed.ts'
import { readingsOf } from './held-readings.ts'
import { idParam } from './kinds.ts'
import { markReading, takeReadings } from './take-readings.ts'

export type Turns = <T>(raceId: string, work: () => Promise<T>) => Promise<T>

const noQuery = z.strictObject({})
const said = judgementDocument.extend({ id: z.string().describe('the reading’s id') })
const movedDays = z.array(moved).describe('days whose followed budget moved')
const one = said.extend({ moved: movedDays })
const many = z.strictObject({ items: z.array(said), moved: movedDays })
const carQuery = z.strictObject({
  car: slug('the car that was read; left out: the car of the budget that is followed').optional(),
})

/** Readings of a race's trackers: kept as they came, learned from where they count. */
export function readingRoutes(api: Api, needs: Needs, turns: Turns): void {
  takeBodies(api, ['json'])
  const schema = {
    tags: ['readings'],
    summary: 'Keep readings of a tracker, say what they show and move the followed budgets',
    description:
      'One reading, or { "readings": […] }, up to 100. The id is made by the sender: the same reading again is harmless, ' +
      'another one under its id is refused.',
    params: idParam('race'),
    querystring: carQuery,
    body: readingsBody,
    response: answers(
      {
        200: { description: 'all of it was kept before', schema: z.union([one, many]) },
        201: { description: 'kept', schema: z.union([one, many]) },
      },
      [
        'bad-id',
        'bad-query',
        'bad-json',
        'empty-body',
        'invalid-document',
        'no-such-document',
        'missing-document',
        'reading-taken',
        'cannot-forecast',
        ...WRITE_ERRORS,
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.post('/races/:id/readings', { schema }, async (request, reply) => {
    const raceId = request.params.id
    const { readings, isBatch } = await needs.compute.run(
      'read-readings',
      { bytes: bytesOf(request.body) },
      clientGone(reply),
    )
    await findRace(needs.store, raceId)
    const { car: carId } = request.query
    const taking = { raceId, readings, isBatch, carId, by: linkOf(request) }
    const { items, moved: days, isNew } = await turns(raceId, () => takeReadings(needs, taking))
    reply.code(isNew ? 201 : 200)
    return isBatch ? { items, moved: days } : { ...items[0], moved: days }
  })
}

/** The readings of a race, and taking one out or back. */
export function keptReadingRoutes(api: Api, needs: Needs, turns: Turns): void {
  const { store } = needs
  const listSchema = {
    tags: ['readings'],
    summary: 'List the readings of a race in the order in which they came',
    params: idParam('race'),
    querystring: noQuery,
    response: answers({ 200: { description: 'its readings', schema: listOf(keptReading) } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/readings', { schema: listSchema }, async ({ params }) => {
    await findRace(store, params.id)
    return { items: await readingsOf(store, params.id) }
  })
  for (const [action, isSetAside, summary] of [
    ['set-aside', true, 'Set a reading aside: it stays kept and is not learned from'],
    ['take-back', false, 'Take back a reading that was set aside'],
  ] as const) {
    const schema = {
      tags: ['readings'],
      summary,
      params: idParam('race').extend({ reading: z.uuid({ error: 'a UUID' }).describe('the reading’s id') }),
      querystring: noQuery,
      response: answers(
        {
          200: {
            description: 'done',
            schema: z.strictObject({ id: z.string(), isSetAside: z.boolean(), moved: movedDays }),
          },
        },
        [
          'bad-id',
          'bad-query',
          'no-such-document',
          'no-such-reading',
          'cannot-forecast',
          ...WRITE_ERRORS,
          ...COMPUTE_ERRORS,
          ...STORE_ERRORS,
        ],
      ),
    }
    api.post(`/races/:id/readings/:reading/${action}`, { schema }, async (request) => {
      const { id: raceId, reading: id } = request.params
      await findRace(store, raceId)
      const mark = { raceId, id, isSetAside, by: linkOf(request) }
      return { id, isSetAside, moved: await turns(raceId, () => markReading(needs, mark)) }
    })
  }
}
