import { z } from 'zod'
import type { FastifyRequest } from 'fastify'
import { checked, readJson } from '../compute/read-json.ts'
import { budgetDocument } from '../documents/budget.ts'
import { label } from '../documents/quantity.ts'
import { raceDocument } from '../documents/race.ts'
import { Fault } from '../errors.ts'
import type { Link } from '../store/link-store.ts'
import { hashOf, linkOf, newToken, shareOf } from './access.ts'
import { answers, listOf, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import type { Api, Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { dayParams, oneDay } from './days.ts'
import { findRace } from './find.ts'
import { followedText, isLearned } from './followed.ts'

const newShare = z.strictObject({ name: label('whom the link is for') })

const shareEntry = z.strictObject({
  id: z.string(),
  name: z.string(),
  createdAt: z.string().describe('instant (ISO 8601, UTC)'),
  isRevoked: z.boolean(),
})
const madeShare = shareEntry.extend({ url: z.string().describe('the link; it is told once and kept nowhere') })

const noQuery = z.strictObject({})
const DAY_ERRORS = ['bad-id', 'bad-query', 'no-such-document', 'no-such-day', ...STORE_ERRORS] as const

const entryOf = ({ id, name, createdAt, isRevoked }: Link): z.output<typeof shareEntry> => ({
  id,
  name,
  createdAt,
  isRevoked,
})

/** Address that people reach this service by, as the one who asks does. */
const originOf = (request: FastifyRequest, publicOrigin: string | null): string =>
  publicOrigin ?? `${request.protocol}://${request.headers.host ?? 'localhost'}`

/** Links that show one day's budget to whoever holds them. */
export function shareRoutes(api: Api, needs: Needs, publicOrigin: string | null): void {
  takeBodies(api, ['json'])
  const { store } = needs
  const schema = {
    tags: ['sharing'],
    summary: 'Make a link that shows one day’s budget, read-only',
    params: dayParams,
    querystring: noQuery,
    body: newShare,
    response: answers({ 201: { description: 'made; its address is told once', schema: madeShare } }, [
      ...DAY_ERRORS,
      'bad-json',
      'empty-body',
      'invalid-document',
      ...WRITE_ERRORS,
    ]),
  }
  api.post('/races/:id/days/:date/shares', { schema }, async (request, reply) => {
    const { id: raceId, date } = request.params
    const { name } = checked(newShare, readJson(bytesOf(request.body)), 'share')
    oneDay((await findRace(store, raceId)).race, date)
    const token = newToken()
    const link = await store.links.createShare({ raceId, date, name, sha256: hashOf(token), by: linkOf(request) })
    const url = `${originOf(request, publicOrigin)}/share#${token}`
    return reply
      .code(201)
      .header('cache-control', 'no-store')
      .send({ ...entryOf(link), url })
  })

  const listSchema = {
    tags: ['sharing'],
    summary: 'List a day’s share links, revoked ones too, newest first',
    params: dayParams,
    querystring: noQuery,
    response: answers({ 200: { description: 'the links, without their tokens', schema: listOf(shareEntry) } }, [
      ...DAY_ERRORS,
    ]),
  }
  api.get('/races/:id/days/:date/shares', { schema: listSchema }, async ({ params }) => {
    oneDay((await findRace(store, params.id)).race, params.date)
    return { items: (await store.links.list(params.id, params.date)).map(entryOf) }
  })
  revokeRoute(api, needs)
}

function revokeRoute(api: Api, { store, live }: Needs): void {
  const schema = {
    tags: ['sharing'],
    summary: 'Revoke a share link: it opens nothing any more, and its open streams end',
    params: dayParams.extend({ share: z.uuid({ error: 'a UUID' }).describe('the link’s id') }),
    querystring: noQuery,
    response: answers({ 204: { description: 'revoked' } }, [
      'bad-id',
      'bad-query',
      'no-such-share',
      'other-host',
      'other-origin',
      ...STORE_ERRORS,
    ]),
  }
  api.delete('/races/:id/days/:date/shares/:share', { schema }, async ({ params }, reply) => {
    const link = await store.links.get(params.share)
    if (link === null || link.raceId !== params.id || link.date !== params.date)
      throw new Fault('no-such-share', `There is no share link ${params.share} of this day.`)
    await store.links.revoke(link.id)
    await live.endStreamsOf(link.id)
    return reply.code(204).send()
  })
}

const shared = z.strictObject({
  name: z.string().describe('name of the link'),
  race: z.string(),
  date: z.string(),
  madeAt: z.string().describe('when the budget was made (ISO 8601, UTC)'),
  learned: z.boolean().describe('whether readings have a part in it'),
  budget: budgetDocument,
})

/**
 * The day that a share link opens.
 *
 * @throws Fault 'no-such-share' for the owner, whose link opens no single day
 */
export function sharedDay(request: FastifyRequest): Link & { raceId: string; date: string } {
  const link = shareOf(request)
  if (link !== null) return link
  throw new Fault('no-such-share', 'This address answers a share link; the owner finds the same at the race’s day.')
}

/** What a share link opens. */
export function sharedRoute(api: Api, needs: Needs): void {
  const { store } = needs
  const schema = {
    tags: ['sharing'],
    summary: 'Get the budget that a share link opens',
    querystring: noQuery,
    response: answers({ 200: { description: 'the budget', schema: shared } }, [
      'bad-query',
      'no-such-share',
      'no-such-document',
      'nothing-followed',
      ...STORE_ERRORS,
    ]),
  }
  api.get('/share/budget', { schema, config: { access: 'share' } }, async (request, reply) => {
    const { raceId, date, name } = sharedDay(request)
    const { stored } = await findRace(store, raceId)
    const { choice, forecast } = await followedText(store, raceId, date)
    reply.header('cache-control', 'no-store')
    return {
      name,
      race: raceDocument.parse(stored.body).name,
      date,
      madeAt: forecast.createdAt,
      learned: await isLearned(needs, raceId, choice.carId),
      budget: forecast.budget,
    }
  })
}
