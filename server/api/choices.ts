import { z } from 'zod'
import { checked, readJson } from '../compute/read-json.ts'
import { budgetDocument } from '../documents/budget.ts'
import { type CampDocument, campDocument } from '../documents/here.ts'
import { slug } from '../documents/quantity.ts'
import { speedsDocument } from '../documents/speeds.ts'
import { Fault } from '../errors.ts'
import { dayTopic } from '../live/topics.ts'
import type { StoredChoice } from '../store/choice-store.ts'
import type { Conflict } from '../store/document-store.ts'
import { linkOf } from './access.ts'
import { answers, COMPUTE_ERRORS, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, type Needs, SPEEDS_LIMIT } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { dayParams, oneDay } from './days.ts'
import { findRace } from './find.ts'
import { dayIn, followed, followedText, isLearned, moved, told } from './followed.ts'
import { gather, makeForecast } from './make-forecast.ts'
import { etag, ifMatch } from './preconditions.ts'
import type { Turns } from './readings.ts'

const newChoice = z
  .strictObject({
    carId: slug('id of a stored car'),
    skyId: slug('id of a stored sky'),
    speeds: speedsDocument,
    until: campDocument
      .describe('where the car is parked before the day’s road ends; left out, the day drives its road')
      .optional(),
  })
  .meta({ title: 'Choice' })

const choiceEntry = z.strictObject({
  carId: z.string(),
  skyId: z.string(),
  speeds: speedsDocument,
  until: campDocument.nullable().describe('where the car is parked before the day’s road ends'),
  version: z.int().describe('counts up with every choice for the day'),
  savedAt: z.string().describe('instant (ISO 8601, UTC)'),
})

const noQuery = z.strictObject({})
const GET_ERRORS = ['bad-id', 'bad-query', 'no-such-document', 'no-such-day', 'nothing-followed'] as const

/** What the crew follows on a day. */
export function choiceRoutes(api: Api, needs: Needs, turns: Turns): void {
  takeBodies(api, ['json'])
  const { store } = needs
  const getSchema = {
    tags: ['following'],
    summary: 'Get what the crew follows on a day',
    params: dayParams,
    querystring: noQuery,
    response: answers({ 200: { description: 'the choice; ETag is its version', schema: choiceEntry } }, [
      ...GET_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/days/:date/choice', { schema: getSchema }, async ({ params }, reply) => {
    oneDay((await findRace(store, params.id)).race, params.date)
    const { choice } = await followed(store, params.id, params.date)
    reply.header('etag', etag(choice.version)).header('cache-control', 'no-cache')
    return entryOf(choice)
  })
  putRoute(api, needs, turns)
  takeBackRoute(api, needs, turns)
}

const entryOf = ({ carId, skyId, speeds, until, version, savedAt }: StoredEntry) => ({
  carId,
  skyId,
  speeds,
  until: (until ?? null) as CampDocument | null,
  version,
  savedAt,
})

type StoredEntry = Pick<StoredChoice, 'carId' | 'skyId' | 'speeds' | 'until' | 'version' | 'savedAt'>

function putRoute(api: Api, needs: Needs, turns: Turns): void {
  const schema = {
    tags: ['following'],
    summary: 'Choose what the crew follows on a day',
    description:
      'Without If-Match it is the first choice of the day, or the first after the last was taken back. With If-Match it replaces that version if it still holds.',
    params: dayParams,
    querystring: noQuery,
    body: newChoice,
    response: answers(
      {
        200: {
          description: 'chosen; ETag is its version',
          schema: choiceEntry.extend({ forecastId: z.string(), moved: z.array(moved) }),
        },
      },
      [
        'bad-id',
        'bad-query',
        'bad-precondition',
        'bad-json',
        'empty-body',
        'invalid-document',
        'no-such-document',
        'no-such-day',
        'missing-document',
        'missing-route',
        'cannot-forecast',
        'precondition-required',
        'version-changed',
        ...WRITE_ERRORS,
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.put('/races/:id/days/:date/choice', { schema, bodyLimit: SPEEDS_LIMIT }, async (request, reply) => {
    const { id: raceId, date } = request.params
    const wanted = checked(newChoice, readJson(bytesOf(request.body)), 'choice')
    oneDay((await findRace(needs.store, raceId)).race, date)
    const signal = clientGone(reply)
    const chosen = await turns(raceId, () =>
      choose(needs, { raceId, date, wanted, ifMatch: ifMatch(request.headers), by: linkOf(request), signal }),
    )
    reply.header('etag', etag(chosen.version))
    return chosen
  })
}

interface Choosing {
  raceId: string
  date: string
  wanted: z.output<typeof newChoice>
  ifMatch: ReturnType<typeof ifMatch>
  by: string | null
  signal: AbortSignal
}

async function choose(needs: Needs, { raceId, date, wanted, ifMatch: named, by, signal }: Choosing) {
  const { store, live } = needs
  const holds = await store.choices.get(raceId, date)
  refuseStale(date, holds?.version ?? null, named)
  const { carId, skyId, speeds, until } = wanted
  const documents = await gather(needs, raceId, wanted)
  const { forecast } = await makeForecast(needs, documents, { speeds, date, until }, signal)
  const choice = { carId, skyId, speeds, until, forecastId: forecast.id }
  const saved = await store.choices.put({ raceId, date }, holds?.version ?? null, choice, by)
  if (saved === 'missing' || 'conflict' in saved) throw changed(date, saved)
  await live.publish(dayTopic(raceId, date), 'choice', { carId, skyId, version: saved.version, savedAt: saved.savedAt })
  const before = holds === null ? null : await store.forecasts.get(holds.forecastId)
  const change = await told(needs, { raceId, date, before, after: forecast }, { cause: 'choice', readingId: null, by })
  const moves = change === null ? [] : [change]
  return { ...entryOf({ ...choice, ...saved }), forecastId: forecast.id, moved: moves }
}

function changed(date: string, saved: Conflict | 'missing'): Fault {
  const now = saved === 'missing' ? '' : ` to version ${saved.conflict}`
  return new Fault('version-changed', `The choice for ${date} has changed${now}.`)
}

/** Takes the choice back, so that nothing is followed on the day. */
function takeBackRoute(api: Api, needs: Needs, turns: Turns): void {
  const schema = {
    tags: ['following'],
    summary: 'Follow nothing on a day any more',
    description: 'Takes the version named by If-Match back if it still holds; its forecasts and history stay.',
    params: dayParams,
    querystring: noQuery,
    response: answers({ 204: { description: 'nothing is followed on the day now' } }, [
      ...GET_ERRORS,
      'bad-precondition',
      'precondition-required',
      'version-changed',
      ...WRITE_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.delete('/races/:id/days/:date/choice', { schema }, async (request, reply) => {
    const { id: raceId, date } = request.params
    oneDay((await findRace(needs.store, raceId)).race, date)
    const named = ifMatch(request.headers)
    await turns(raceId, () => takeBack(needs, { raceId, date, ifMatch: named, by: linkOf(request) }))
    return reply.code(204).send()
  })
}

async function takeBack(
  { store, live }: Needs,
  { raceId, date, ifMatch: named, by }: Pick<Choosing, 'raceId' | 'date' | 'ifMatch' | 'by'>,
): Promise<void> {
  const { choice, forecast } = await followed(store, raceId, date)
  refuseStale(date, choice.version, named)
  const saved = await store.choices.takeBack({ raceId, date }, choice.version, by)
  if (saved === 'missing' || 'conflict' in saved) throw changed(date, saved)
  const closingWhBefore = dayIn(forecast, date)?.closing.wh ?? null
  const move = { raceId, date, cause: 'choice' as const, readingId: null, pointsPct: {}, forecastId: forecast.id, by }
  await store.moves.add({ ...move, closingWhBefore, closingWhAfter: null })
  await live.publish(dayTopic(raceId, date), 'choice', { carId: null, skyId: null, ...saved })
}

function refuseStale(date: string, version: number | null, named: ReturnType<typeof ifMatch>): void {
  if (version === null && named === null) return
  if (version === null) throw new Fault('version-changed', `Nothing is followed on ${date} now.`)
  if (named !== null && (named === '*' || named.includes(version))) return
  const tag = etag(version)
  const details = { errors: [{ field: 'If-Match', detail: `expected ${tag}` }], headers: { etag: tag } }
  if (named === null)
    throw new Fault('precondition-required', `A budget is followed on ${date}; send If-Match: ${tag}.`, details)
  throw new Fault('version-changed', `The choice for ${date} is in version ${version} now; read it again.`, details)
}

const current = z.strictObject({
  forecastId: z.string(),
  madeAt: z.string().describe('instant (ISO 8601, UTC)'),
  choice: choiceEntry,
  learned: z.boolean().describe('whether readings have a part in it'),
  budget: budgetDocument,
})

/** The budget that the crew follows. */
export function followedRoute(api: Api, needs: Needs): void {
  const { store } = needs
  const schema = {
    tags: ['following'],
    summary: 'Get the budget that the crew follows on a day',
    params: dayParams,
    querystring: noQuery,
    response: answers({ 200: { description: 'the newest forecast of what was chosen', schema: current } }, [
      ...GET_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/days/:date/budget', { schema }, async ({ params }, reply) => {
    oneDay((await findRace(store, params.id)).race, params.date)
    const { choice, forecast } = await followedText(store, params.id, params.date)
    reply.header('cache-control', 'no-cache')
    return {
      forecastId: forecast.id,
      madeAt: forecast.createdAt,
      choice: entryOf(choice),
      learned: await isLearned(needs, params.id, choice.carId),
      budget: forecast.budget,
    }
  })
}
