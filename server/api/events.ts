import type { ServerResponse } from 'node:http'
import { z } from 'zod'
import { dayTopic, raceTopic } from '../live/topics.ts'
import { linkOf } from './access.ts'
import { answers, STORE_ERRORS } from './answers.ts'
import type { Api, Needs } from './api.ts'
import { dayParams, oneDay } from './days.ts'
import { streamEvents } from './event-stream.ts'
import { findRace } from './find.ts'
import { idParam } from './kinds.ts'
import { sharedDay } from './shares.ts'

const stream = {
  description: 'server-sent events (HTML standard); they resume after Last-Event-ID',
  schema: z.string(),
  mediaType: 'text/event-stream',
}

const ALL_KINDS = ['forecast', 'reading', 'choice', 'plan', 'variant']
/** A share link tells of the budget alone. */
const SHARED_KINDS = ['forecast']

/** What happens to a day while it is watched. */
export function eventRoutes(api: Api, needs: Needs): void {
  const { store } = needs
  const open = new Set<ServerResponse>()
  // A stream that stays open would keep the service from stopping.
  api.addHook('preClose', async () => open.forEach((raw) => raw.end()))
  const schema = {
    tags: ['following'],
    summary: 'Watch a day: events "forecast", "reading", "choice", "plan" and "variant"',
    params: dayParams,
    querystring: z.strictObject({}),
    response: answers({ 200: stream }, ['bad-id', 'bad-query', 'no-such-document', 'no-such-day', ...STORE_ERRORS]),
  }
  api.get('/races/:id/days/:date/events', { schema, exposeHeadRoute: false }, async (request, reply) => {
    const { id, date } = request.params
    oneDay((await findRace(store, id)).race, date)
    const listens = { topic: dayTopic(id, date), kinds: ALL_KINDS, linkId: linkOf(request) }
    await streamEvents({ live: needs.live, open }, request, reply, listens)
  })

  const raceSchema = {
    tags: ['following'],
    summary: 'Watch a race as a whole: event "race-plan"',
    params: idParam('race'),
    querystring: z.strictObject({}),
    response: answers({ 200: stream }, ['bad-id', 'bad-query', 'no-such-document', ...STORE_ERRORS]),
  }
  api.get('/races/:id/events', { schema: raceSchema, exposeHeadRoute: false }, async (request, reply) => {
    const { id } = request.params
    await findRace(store, id)
    const listens = { topic: raceTopic(id), kinds: ['race-plan'], linkId: linkOf(request) }
    await streamEvents({ live: needs.live, open }, request, reply, listens)
  })

  const sharedSchema = {
    tags: ['sharing'],
    summary: 'Watch the day that a share link opens: event "forecast"',
    querystring: z.strictObject({}),
    response: answers({ 200: stream }, ['bad-query', 'no-such-share', ...STORE_ERRORS]),
  }
  const sharedOptions = { schema: sharedSchema, exposeHeadRoute: false, config: { access: 'share' } as const }
  api.get('/share/events', sharedOptions, async (request, reply) => {
    const { raceId, date, id } = sharedDay(request)
    const listens = { topic: dayTopic(raceId, date), kinds: SHARED_KINDS, linkId: id }
    await streamEvents({ live: needs.live, open }, request, reply, listens)
  })
}
