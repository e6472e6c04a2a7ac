import { z } from 'zod'
import { checked, readJson } from '../compute/read-json.ts'
import { budgetDocument } from '../documents/budget.ts'
import { slug } from '../documents/quantity.ts'
import { speedsDocument } from '../documents/speeds.ts'
import { Fault } from '../errors.ts'
import { dayTopic } from '../live/topics.ts'
import { linkOf } from './access.ts'
import { answers, COMPUTE_ERRORS, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, type Needs, SPEEDS_LIMIT } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { dayParams, oneDay } from './days.ts'
import { findRace } from './find.ts'
import { followed, isLearned, moved, told } from './followed.ts'
import { gather, makeForecast } from './make-forecast.ts'
import { etag, ifMatch } from './preconditions.ts'
import type { Turns } from './readings.ts'

const newChoice = z
  .strictObject({ carId: slug('id of a stored car'), skyId: slug('id of a stored sky'), speeds: speedsDocument })
  .meta({ title: 'Choice' })

const choiceEntry = z.strictObject({
  carId: z.string(),
  skyId: z.string(),
  speeds: speedsDocument,
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
}

const entryOf = ({ carId, skyId, speeds, version, savedAt }: z.input<typeof choiceEntry> | StoredEntry) => ({
  carId,
  skyId,
  speeds,
  version,
  savedAt,
})

type StoredEntry = Omit<z.input<typeof choiceEntry>, 'speeds'> & { speeds: unknown }

function putRoute(api: Api, needs: Needs, turns: Turns): void {
  const schema = {
    tags: ['following'],
    summary: 'Choose what the crew follows on a day',
    description:
      'Without If-Match it is the first choice of the day. With If-Match it replaces that version if it still holds.',
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
  const { carId, skyId, speeds } = wanted
  const documents = await gather(needs, raceId, wanted)
  const { forecast } = await makeForecast(needs, documents, { speeds, date }, signal)
  const choice = { carId, skyId, speeds, forecastId: forecast.id }
  const saved = await store.choices.put({ raceId, date }, holds?.version ?? null, choice, by)
  if (saved === 'missing' || 'conflict' in saved) {
    const now = saved === 'missing' ? null : saved.conflict
    throw new Fault('version-changed', `The choice for ${date} has changed${now === null ? '' : ` to version ${now}`}.`)
  }
  await live.publish(dayTopic(raceId, date), 'choice', { carId, skyId, version: saved.version, savedAt: saved.savedAt })
  const before = holds === null ? null : await store.forecasts.get(holds.forecastId)
  const change = await told(needs, { raceId, date, before, after: forecast }, { cause: 'choice', readingId: null, by })
  const { version, savedAt } = saved
  return { carId, skyId, speeds, version, savedAt, forecastId: forecast.id, moved: change === null ? [] : [change] }
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
    const { choice, forecast } = await followed(store, params.id, params.date)
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
