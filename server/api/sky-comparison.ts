import { z } from 'zod'
import type { Reference } from '../compute/forecast-jobs.ts'
import { type OpenComparison, openComparison } from '../compute/sky-jobs.ts'
import { skyComparison } from '../documents/sky-comparison.ts'
import { answers, COMPUTE_ERRORS, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { named } from './gather.ts'
import { wholeRequest } from './stateless-forecast.ts'

/** How far a forecast was from what was measured; nothing is saved. */
export function skyComparisonRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['skies'],
    summary: 'Compare a forecast with what was measured',
    description:
      'Each sky stands in the body or is named as { "id": "…" }. Over the rows of the measured sky that the forecast reaches over, at each measured place: bias, mean absolute error and rms, by hour of day and by lead time; energy of each day; and, with a day, what the difference is worth in Wh.',
    querystring: z.strictObject({}),
    body: openComparison,
    response: answers({ 200: { description: 'the comparison', schema: skyComparison } }, [
      'bad-query',
      'bad-json',
      'empty-body',
      'invalid-document',
      'missing-document',
      'missing-route',
      'cannot-compare',
      ...WRITE_ERRORS,
      ...COMPUTE_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.post('/sky-comparison', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const read = await compute.run('read-sky-comparison', { bytes: bytesOf(request.body) }, signal)
    const comparison = await compute.run('compare-skies', await whole(needs, read, signal), signal)
    return reply.type('application/json; charset=utf-8').send(comparison)
  })
}

/** The comparison with every document that it names. */
async function whole(needs: Needs, { forecast, measured, zone, day }: OpenComparison, signal: AbortSignal) {
  const skies = await Promise.all([skyOf(needs, 'forecast', forecast), skyOf(needs, 'measured', measured)])
  const request = { forecast: skies[0], measured: skies[1], ...(zone === undefined ? {} : { zone }) }
  if (day === undefined) return request
  const { sky: _, ...rest } = await wholeRequest(needs, { ...day, sky: forecast }, signal, 'day.')
  return { ...request, day: rest }
}

const skyOf = async ({ store }: Needs, field: string, given: object | Reference): Promise<unknown> =>
  'id' in given ? (await named(store, 'sky', given.id, `${field}.id`)).body : given
