import { z } from 'zod'
import { openPlanRequest } from '../compute/plan-jobs.ts'
import { checked, readJson } from '../compute/read-json.ts'
import { planDocument } from '../documents/plan.ts'
import { type PlanGist, planGist } from '../documents/plan-gist.ts'
import { planRequest } from '../documents/plan-request.ts'
import { slug } from '../documents/quantity.ts'
import { Fault } from '../errors.ts'
import { dayTopic } from '../live/topics.ts'
import type { PlanEntry } from '../store/plan-store.ts'
import { answers, COMPUTE_ERRORS, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { oneDay } from './days.ts'
import { findRace } from './find.ts'
import { idParam } from './kinds.ts'
import type { PlanDesk, PlanTrade } from './plan-desk.ts'
import { planInputs } from './plan-inputs.ts'
import { STATELESS_ERRORS, wholeRequest } from './stateless-forecast.ts'

const DESCRIPTION =
  'The earliest arrival that keeps reserve, stops and target, the same in sections of 10 to 20 km and whole km/h for people, a proven bound on any better plan, the price of energy, and ranges over days drawn from the spreads given. Plans are estimates: posted limits, the event’s rules and the battery management system come first.'

const wantedFields = planRequest.pick({
  targetPct: true,
  objective: true,
  byTime: true,
  spreads: true,
  promisePct: true,
  members: true,
  seed: true,
  from: true,
  until: true,
})
const newPlan = wantedFields
  .extend({
    carId: slug('id of a stored car'),
    skyId: slug('id of a stored sky'),
    date: planRequest.shape.date,
  })
  .meta({ title: 'New plan' })

const planEntry = z.strictObject({
  id: z.string(),
  raceId: z.string(),
  date: z.string(),
  carId: z.string(),
  skyId: z.string(),
  wanted: wantedFields,
  inputsHash: z.string().describe('SHA-256 over the canonical JSON of everything the plan is made from'),
  engineVersion: z.string(),
  state: z.enum(['working', 'done', 'failed', 'cancelled']),
  fault: z.strictObject({ code: z.string(), detail: z.string() }).nullable().describe('why it failed'),
  startedAt: z.string().describe('instant (ISO 8601, UTC)'),
  endedAt: z.string().nullable().describe('instant (ISO 8601, UTC)'),
  gist: planGist.nullable().describe('the plan in short; null until it is done'),
})
const planAnswer = planEntry.extend({ plan: planDocument.nullable() })

/** Plans of a day: its stream is told of them. */
export const DAY_PLANS: PlanTrade = {
  job: 'plan',
  work: 'kept-plan',
  kept: ({ plans }) => plans,
  topic: ({ raceId, date }) => dayTopic(raceId, date),
}

const noQuery = z.strictObject({})
const planId = z.strictObject({ id: z.uuid({ error: 'a UUID' }).describe('the plan’s id') })

/** A plan of documents that come with the request, or are named in it; nothing is saved. */
export function statelessPlanRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['plans'],
    summary: 'Plan a day of whole documents; nothing is saved',
    description: `${DESCRIPTION} Takes the body of /forecast without speeds, and what is wanted of the plan.`,
    querystring: noQuery,
    body: openPlanRequest,
    response: answers({ 200: { description: 'the plan', schema: planDocument } }, STATELESS_ERRORS),
  }
  api.post('/plan', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const read = await compute.run('read-plan-request', { bytes: bytesOf(request.body) }, signal)
    const { wanted, ...open } = read
    const whole = await wholeRequest(needs, { ...open, speeds: { kind: 'constant', speedKmh: 70 } }, signal)
    const { speeds: _speeds, ...documents } = whole
    const plan = await compute.run('plan', { ...documents, ...wanted, date: open.date }, signal)
    return reply.type('application/json; charset=utf-8').send(plan)
  })
}

/** Plans of stored documents: ordered, worked out in the background, kept. */
export function planRoutes(api: Api, needs: Needs, desk: PlanDesk): void {
  takeBodies(api, ['json'])
  const { store } = needs
  const orderSchema = {
    tags: ['plans'],
    summary: 'Order a plan of a day with a stored car and sky',
    description: `${DESCRIPTION} The plan is worked out in the background; the day’s event stream tells how far it is. The same inputs and engine give the plan that is there already.`,
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
  api.post('/races/:id/plans', { schema: orderSchema }, async (request, reply) => {
    const raceId = request.params.id
    const { carId, skyId, date, ...wanted } = checked(newPlan, readJson(bytesOf(request.body)), 'plan request')
    oneDay((await findRace(store, raceId)).race, date)
    const { inputs, versions } = await planInputs(needs, { raceId, carId, skyId, date, wanted })
    const id = await desk.order({ raceId, date, carId, skyId, versions, wanted, inputs })
    const plan = await planOf(needs, id)
    return reply
      .code(plan.state === 'working' ? 202 : 200)
      .header('location', `/api/v1/plans/${id}`)
      .send(plan)
  })

  const cancelSchema = {
    tags: ['plans'],
    summary: 'Take a plan back that is being worked out; one that is done stays',
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
  api.delete('/plans/:id', { schema: cancelSchema }, async ({ params }) => {
    await planOf(needs, params.id)
    await desk.cancel(params.id)
    return planOf(needs, params.id)
  })
}

/** Plans as they are kept. */
export function keptPlanRoutes(api: Api, needs: Needs): void {
  const { store } = needs
  const getSchema = {
    tags: ['plans'],
    summary: 'Get a plan, or how far it is',
    params: planId,
    querystring: noQuery,
    response: answers({ 200: { description: 'the plan', schema: planAnswer } }, [
      'bad-id',
      'bad-query',
      'no-such-plan',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/plans/:id', { schema: getSchema }, async ({ params }, reply) => {
    reply.header('cache-control', 'no-cache')
    return planOf(needs, params.id)
  })

  const listSchema = {
    tags: ['plans'],
    summary: 'List the last 50 plans of a race, newest first, without their bodies',
    params: idParam('race'),
    querystring: noQuery,
    response: answers({ 200: { description: 'its plans', schema: listOf(planEntry) } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/plans', { schema: listSchema }, async ({ params }) => {
    await findRace(store, params.id)
    return { items: (await store.plans.list(params.id)).map(entryOf) }
  })
}

const entryOf = ({ wanted, gist, ...entry }: PlanEntry): z.input<typeof planEntry> => ({
  ...entry,
  gist: gist as PlanGist | null,
  wanted: wanted as z.input<typeof wantedFields>,
})

async function planOf({ store }: Needs, id: string) {
  const stored = await store.plans.get(id)
  if (stored === null) throw new Fault('no-such-plan', `There is no plan ${id}.`)
  const { plan, ...entry } = stored
  return { ...entryOf(entry), plan }
}
