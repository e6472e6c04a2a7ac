import { z } from 'zod'
import { checked, readJson } from '../compute/read-json.ts'
import { date, quantity, slug } from '../documents/quantity.ts'
import { trackerDay } from '../documents/tracker-day.ts'
import { trackerReport } from '../documents/tracker-report.ts'
import { ERRORS, Fault } from '../errors.ts'
import type { StoredForecast } from '../store/forecast-store.ts'
import type { Move } from '../store/move-store.ts'
import type { Store } from '../store/store.ts'
import { linkOf } from './access.ts'
import { answers, COMPUTE_ERRORS, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { findRace } from './find.ts'
import { dayIn, followed, makeAnew, moved } from './followed.ts'
import { named } from './gather.ts'
import { inputsAgain } from './make-forecast.ts'
import { readingsOf } from './held-readings.ts'
import { idParam } from './kinds.ts'
import type { Turns } from './readings.ts'

const uses = z.enum(['learned', 'bench']).describe('which curve the race’s forecasts use')
const widen = quantity(1, 100, 'factor on the spread of every bench')
const reportQuery = z.strictObject({
  date: date('day whose followed budget tells where the energy fell').optional(),
  car: slug('the car; left out: the car of the budget that is followed').optional(),
  work: z.enum(['yes', 'no']).describe('whether to drive the day again for its parts').default('yes'),
})
const report = z.strictObject({
  carId: z.string(),
  uses,
  widen,
  items: z.array(trackerReport),
  work: trackerDay
    .nullable()
    .describe('the day and its parts, driven again; null where no budget of it is followed, or with work=no'),
})

/** Every tracker of a car before and after its readings, and what moved the budgets. */
export function trackerRoutes(api: Api, needs: Needs): void {
  const { store, compute } = needs
  const schema = {
    tags: ['readings'],
    summary: 'Show every tracker: its curve and band before and after its readings, and its part in the day',
    params: idParam('race'),
    querystring: reportQuery,
    response: answers({ 200: { description: 'the trackers', schema: report } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      'missing-document',
      'nothing-followed',
      'invalid-document',
      'cannot-forecast',
      ...COMPUTE_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/trackers', { schema }, async ({ params, query }, reply) => {
    await findRace(store, params.id)
    const { carId, day, forecast } = await lookedAt(store, params.id, query)
    const car = await named(store, 'car', carId, 'car')
    const [use, readings] = await Promise.all([store.beliefs.uses(params.id), readingsOf(store, params.id)])
    const own = readings.filter((kept) => kept.carId === carId)
    const input = { car: car.body, readings: own, widen: use.widen, day }
    const signal = clientGone(reply)
    const items = await compute.run('report-trackers', input, signal)
    const isWanted = forecast !== null && query.work === 'yes'
    const work = !isWanted ? null : await dayAgain(needs, forecast, day.date, signal)
    return { carId, uses: use.which, widen: use.widen, items, work }
  })

  const historySchema = {
    tags: ['readings'],
    summary: 'List what moved the followed budgets, newest first',
    params: idParam('race'),
    querystring: z.strictObject({ date: date('one day only').optional() }),
    response: answers({ 200: { description: 'the history', schema: listOf(move) } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/history', { schema: historySchema }, async ({ params, query }) => {
    await findRace(store, params.id)
    return { items: (await store.moves.list(params.id, query.date)).map(moveOf) }
  })
}

const move = z.strictObject({
  date: z.string(),
  cause: z.enum(['reading', 'set-aside', 'take-back', 'use-bench', 'use-learned', 'choice', 'engine']),
  readingId: z.string().nullable(),
  pointsPct: z.record(z.string(), z.number()).describe('efficiency over the day, by tracker [points]'),
  closingWhBefore: z.number().nullable().describe('closing balance before; null for the first budget of a day [Wh]'),
  closingWhAfter: z.number().nullable().describe('closing balance then [Wh]'),
  forecastId: z.string(),
  movedAt: z.string().describe('instant (ISO 8601, UTC)'),
})

const moveOf = (stored: Move): z.input<typeof move> => ({
  date: stored.date,
  cause: stored.cause,
  readingId: stored.readingId,
  pointsPct: stored.pointsPct,
  closingWhBefore: stored.closingWhBefore,
  closingWhAfter: stored.closingWhAfter,
  forecastId: stored.forecastId,
  movedAt: stored.movedAt,
})

/** The car and the day that a report is about; the day is null where nothing is followed on it. */
async function lookedAt(store: Store, raceId: string, query: z.output<typeof reportQuery>) {
  const choices = await store.choices.list(raceId)
  const choice =
    choices.find((one) => one.date === query.date) ?? (query.date === undefined ? choices.at(-1) : undefined)
  const carId = query.car ?? choice?.carId ?? choices.at(-1)?.carId
  if (carId === undefined)
    throw new Fault('nothing-followed', 'No budget is followed yet; say whose trackers to show with ?car=….')
  if (choice === undefined || choice.carId !== carId) return { carId, day: null, forecast: null }
  const { forecast } = await followed(store, raceId, choice.date)
  const day = dayIn(forecast, choice.date)
  if (day === null) return { carId, day, forecast: null }
  return { carId, day: { date: day.date, trackers: day.trackers }, forecast }
}

/** The followed day driven again from the documents it was made of; null where they give no forecast any more. */
async function dayAgain(needs: Needs, forecast: StoredForecast, date: string, signal: AbortSignal) {
  try {
    const inputs = await inputsAgain(needs, forecast, date, signal)
    return (await needs.compute.run('report-tracker-days', inputs, signal)).days[0] ?? null
  } catch (error) {
    if (error instanceof Fault && [404, 422].includes(ERRORS[error.code].status)) return null
    throw error
  }
}

const belief = z.strictObject({ use: uses, widen: widen.optional() })

/** Going back to the bench, and on again. */
export function beliefRoute(api: Api, needs: Needs, turns: Turns): void {
  takeBodies(api, ['json'])
  const schema = {
    tags: ['readings'],
    summary: 'Say whether the race’s forecasts use what was learned or the bench, and how far the bench is trusted',
    params: idParam('race'),
    querystring: z.strictObject({}),
    body: belief,
    response: answers(
      { 200: { description: 'done', schema: z.strictObject({ uses, widen, moved: z.array(moved) }) } },
      [
        'bad-id',
        'bad-query',
        'bad-json',
        'empty-body',
        'invalid-document',
        'no-such-document',
        'cannot-forecast',
        ...WRITE_ERRORS,
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.post('/races/:id/belief', { schema }, async (request, _reply) => {
    const raceId = request.params.id
    const { use, widen: factor } = checked(belief, readJson(bytesOf(request.body)), 'belief')
    await findRace(needs.store, raceId)
    const by = linkOf(request)
    return turns(raceId, async () => {
      const wide = factor ?? (await needs.store.beliefs.uses(raceId)).widen
      await needs.store.beliefs.use(raceId, use, wide, by)
      const cause = use === 'bench' ? 'use-bench' : 'use-learned'
      return { uses: use, widen: wide, moved: await makeAnew(needs, raceId, { cause, readingId: null, by }) }
    })
  })
}
