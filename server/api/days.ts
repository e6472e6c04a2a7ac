import { z } from 'zod'
import { date, slug } from '../documents/quantity.ts'
import type { DayDocument, RaceDocument } from '../documents/race.ts'
import { Fault } from '../errors.ts'
import { answers, listOf, STORE_ERRORS } from './answers.ts'
import type { Api, Needs } from './api.ts'
import { findRace } from './find.ts'
import { idParam } from './kinds.ts'

const stageEntry = z.strictObject({
  id: z.string(),
  name: z.string(),
  start: z.string().describe('place where it starts'),
  finish: z.string().describe('place where it ends'),
  route: z.string().describe('id of the route'),
  fromKm: z.number().describe('start on the route [km]'),
  toKm: z.number().describe('end on the route; left out: at its end [km]').optional(),
})

const dayEntry = z.strictObject({
  date: z.string(),
  zone: z.string().describe('time zone of the day'),
  driving: z.strictObject({ from: z.string(), to: z.string() }).describe('driving hours, local time'),
  stages: z.array(stageEntry),
})

const dayOf = (race: RaceDocument, day: DayDocument): z.output<typeof dayEntry> => ({
  date: day.date,
  zone: day.zone ?? race.zone,
  driving: day.driving,
  stages: day.stages.map(({ id, name, start, finish, route, fromKm, toKm }) => ({
    ...(toKm === undefined ? {} : { toKm }),
    id,
    name,
    start,
    finish,
    route,
    fromKm,
  })),
})

export function oneDay(race: RaceDocument, wanted: string): z.output<typeof dayEntry> {
  const day = race.days.find(({ date }) => date === wanted)
  if (day !== undefined) return dayOf(race, day)
  const days = race.days.map(({ date }) => date).join(', ')
  throw new Fault('no-such-day', `The race "${race.name}" has no day ${wanted}; its days are ${days}.`)
}

export const dayParams = z.strictObject({ id: slug('the race’s name for machines'), date: date('day of the race') })
const noQuery = z.strictObject({})

/** A race's days and stages, as its document says. */
export function dayRoutes(api: Api, { store }: Needs): void {
  const daysSchema = {
    tags: ['races'],
    summary: 'List the days of a race with their stages',
    params: idParam('race'),
    querystring: noQuery,
    response: answers({ 200: { description: 'its days', schema: listOf(dayEntry) } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/races/:id/days', { schema: daysSchema }, async ({ params }) => {
    const { race } = await findRace(store, params.id)
    return { items: race.days.map((day) => dayOf(race, day)) }
  })

  const oneOf = (summary: string, description: string, schema: z.ZodType) => ({
    tags: ['races'],
    summary,
    params: dayParams,
    querystring: noQuery,
    response: answers({ 200: { description, schema } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      'no-such-day',
      ...STORE_ERRORS,
    ]),
  })
  const daySchema = oneOf('Get one day of a race', 'the day', dayEntry)
  api.get('/races/:id/days/:date', { schema: daySchema }, async ({ params }) =>
    oneDay((await findRace(store, params.id)).race, params.date),
  )
  const stagesSchema = oneOf('List the stages of one day', 'stages that may start on the day', listOf(stageEntry))
  api.get('/races/:id/days/:date/stages', { schema: stagesSchema }, async ({ params }) => ({
    items: oneDay((await findRace(store, params.id)).race, params.date).stages,
  }))
}
