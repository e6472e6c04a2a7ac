import { z } from 'zod'
import { openRacePlanRequest } from '../compute/race-plan-jobs.ts'
import { checked, readJson } from '../compute/read-json.ts'
import { slug } from '../documents/quantity.ts'
import { type RaceDocument, raceDocument } from '../documents/race.ts'
import { racePlanDocument } from '../documents/race-plan.ts'
import { type RacePlanGist, racePlanGist } from '../documents/race-plan-gist.ts'
import { racePlanRequest, raceWanted } from '../documents/race-plan-request.ts'
import { Fault } from '../errors.ts'
import { raceTopic } from '../live/topics.ts'
import type { PlanEntry } from '../store/plan-store.ts'
import { answers, COMPUTE_ERRORS, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { oneDay } from './days.ts'
import { findRace } from './find.ts'
import { idParam } from './kinds.ts'
import { gather, learnedLosses, versionsOf } from './make-forecast.ts'
import type { PlanDesk, PlanTrade } from './plan-desk.ts'
import { STATELESS_ERRORS, wholeRequest } from './stateless-forecast.ts'

const DESCRIPTION =
  'All days together: each night closes with the charge that lets the days around it take least time, unless race or order give it; then it is told what that costs. For each day speeds for people, battery, range and price of energy; a day whose road its hours do not finish ends at a camp and the next goes on from there. Plans are estimates: posted limits, the event’s rules and the battery management system come first.'

/** Race plans: the race’s own stream is told of them. */
export const RACE_PLANS: PlanTrade = {
  job: 'race-plan',
  work: 'kept-race-plan',
  kept: ({ racePlans }) => racePlans,
  topic: ({ raceId }) => raceTopic(raceId),
}

const wantedFields = raceWanted.extend({ from: racePlanRequest.shape.from })
const newPlan = wantedFields
  .extend({ carId: slug('id of a stored car'), skyId: slug('id of a stored sky') })
  .meta({ title: 'New race plan' })

const planEntry = z.strictObject({
  id: z.string(),
  raceId: z.string(),
  date: z.string().describe('the first planned day'),
  carId: z.string(),
  skyId: z.string(),
  wanted: wantedFields,
  inputsHash: z.string().describe('SHA-256 over the canonical JSON of everything the plan is made from'),
  engineVersion: z.string(),
  state: z.enum(['working', 'done', 'failed', 'cancelled']),
  fault: z.strictObject({ code: z.string(), detail: z.string() }).nullable().describe('why it failed'),
  startedAt: z.string().describe('instant (ISO 8601, UTC)'),
  endedAt: z.string().nullable().describe('instant (ISO 8601, UTC)'),
  gist: racePlanGist.nullable().describe('the plan in short; null until it is done'),
})
const planAnswer = planEntry.extend({ plan: racePlanDocument.nullable() })

const noQuery = z.strictObject({})
const planId = z.strictObject({ id: z.uuid({ error: 'a UUID' }).describe('the race plan’s id') })

/** Computations in one day of a race plan: it is planned, and its night weighed. */
const PARTS_A_DAY = 2

/** A race plan of documents that come with the request, or are named in it; nothing is saved. */
export function statelessRacePlanRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['plans'],
    summary: 'Plan the days of a race together, of whole documents; nothing is saved',
    description: `${DESCRIPTION} Takes the body of /forecast without speeds, date and until, and what is wanted of the plan.`,
    querystring: noQuery,
    body: openRacePlanRequest,
    response: answers({ 200: { description: 'the plan', schema: racePlanDocument } }, STATELESS_ERRORS),
  }
  api.post('/race-plan', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const { wanted, ...open } = await compute.run('read-race-plan-request', { bytes: bytesOf(request.body) }, signal)
    const whole = await wholeRequest(needs, { ...open, speeds: { kind: 'constant', speedKmh: 70 } }, signal)
    const { car, race, sky, routes, from, learned } = whole
    const inputs = { car, race, sky, routes, from, learned, ...wanted }
    const parts = PARTS_A_DAY * raceDocument.parse(race).days.length
    const plan = await compute.run('race-plan', inputs, signal, undefined, parts)
    return reply.type('application/json; charset=utf-8').send(plan)
  })
}

/** Race plans of stored documents: ordered, worked out in the background, kept. */
export function racePlanRoutes(api: Api, needs: Needs, desk: PlanDesk): void {
  takeBodies(api, ['json'])
  const { store } = needs
  const orderSchema = {
    tags: ['plans'],
    summary: 'Order a plan of the days of a race together with a stored car and sky',
    description: `${DESCRIPTION} The plan is worked out in the background; the race’s event stream tells how far it is. The same inputs and engine give the plan that is there already.`,
    params: idParam('race'),
    querystring: noQuery,
    body: newPlan,
    response: answers(
      {
        200: { description: 'this plan is there already', schema: planAnswer },
        202: { description: 'being worked out; Location is its address', schema: planAnswer },
      },
      [
        'bad-id',
        'bad-query',
        'bad-json',
        'empty-body',
        'invalid-document',
        'no-such-document',
        'no-such-day',
        'missing-document',
        'missing-route',
        ...WRITE_ERRORS,
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.post('/races/:id/race-plans', { schema: orderSchema }, async (request, reply) => {
    const raceId = request.params.id
    const { carId, skyId, ...wanted } = checked(newPlan, readJson(bytesOf(request.body)), 'race plan request')
    const found = (await findRace(store, raceId)).race
    const date = firstDate(found, wanted)
    const { race, car, sky, routes } = await gather(needs, raceId, { carId, skyId })
    const bodies = Object.fromEntries([...routes].map(([id, route]) => [id, route.body]))
    const learned = await learnedLosses(needs, race.id, car)
    const inputs = { car: car.body, race: race.body, sky: sky.body, routes: bodies, learned, ...wanted }
    const versions = versionsOf({ race, car, sky, routes })
    const parts = PARTS_A_DAY * found.days.length
    const id = await desk.order({ raceId, date, carId, skyId, versions, wanted, inputs, parts })
    const plan = await planOf(needs, id)
    return reply
      .code(plan.state === 'working' ? 202 : 200)
      .header('location', `/api/v1/race-plans/${id}`)
      .send(plan)
  })

  const cancelSchema = {
    tags: ['plans'],
    summary: 'Take a race plan back that is being worked out; one that is done stays',
    params: planId,
    querystring: noQuery,
    response: answers({ 200: { description: 'the plan as it is now', schema: planAnswer } }, [
      'bad-id',
      'bad-query',
      'no-such-plan',
      ...WRITE_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.delete('/race-plans/:id', { schema: cancelSchema }, async ({ params }) => {
    await planOf(needs, params.id)
    await desk.cancel(params.id)
    return planOf(needs, params.id)
  })
}

/**
 * The first day that is to be planned.
 *
 * @throws Fault 'no-such-day' when the order names a day that the race does not have
 */
function firstDate(race: RaceDocument, { fromDate, toDate, from, nights }: z.output<typeof wantedFields>): string {
  for (const named of [fromDate, toDate, ...nights.map(({ date }) => date)])
    if (named !== undefined) oneDay(race, named)
  const begun = from?.at.slice(0, 10)
  return fromDate ?? race.days.find(({ date }) => date === begun)?.date ?? race.days[0].date
}

/** Race plans as they are kept. */
export function keptRacePlanRoutes(api: Api, needs: Needs): void {
  const { store } = needs
  const getSchema = {
    tags: ['plans'],
    summary: 'Get a race plan, or how far it is',
    params: planId,
    querystring: noQuery,
    response: answers({ 200: { description: 'the plan', schema: planAnswer } }, [
      'bad-id',
      'bad-query',
      'no-such-plan',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/race-plans/:id', { schema: getSchema }, async ({ params }, reply) => {
    reply.header('cache-control', 'no-cache')
    return planOf(needs, params.id)
  })

  const listSchema = {
    tags: ['plans'],
    summary: 'List the last 50 race plans of a race, newest first, without their bodies',
    params: idParam('race'),
    querystring: noQuery,
    response: answers({ 200: { description: 'its race plans', schema: listOf(planEntry) } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/race-plans', { schema: listSchema }, async ({ params }) => {
    await findRace(store, params.id)
    return { items: (await store.racePlans.list(params.id)).map(entryOf) }
  })
}

const entryOf = ({ wanted, gist, ...entry }: PlanEntry): z.input<typeof planEntry> => ({
  ...entry,
  gist: gist as RacePlanGist | null,
  wanted: wanted as z.input<typeof wantedFields>,
})

async function planOf({ store }: Needs, id: string) {
  const stored = await store.racePlans.get(id)
  if (stored === null) throw new Fault('no-such-plan', `There is no race plan ${id}.`)
  const { plan, ...entry } = stored
  return { ...entryOf(entry), plan }
}
