import { z } from 'zod'
import { coastDownRequest } from '../documents/coast-down.ts'
import { coastDownDocument } from '../documents/coast-down-result.ts'
import { answers, COMPUTE_ERRORS, notice, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { coastOptions, coastQuery } from './coast-options.ts'
import { bytesOf, formatOf, takeBodies } from './content.ts'
import { COAST_TABLE } from './examples/coast-down.ts'
import { named } from './gather.ts'

const answer = z.strictObject({
  result: coastDownDocument,
  notices: z.array(notice).describe('what the reader of a file did on its own'),
})

const table = z
  .string()
  .describe(
    'a logged table: time (s, clock or stamp), speed, run, direction (there, back) or heading; optionally grade (%), headwind and crosswind, or wind speed with the direction it comes FROM',
  )
  .meta({ examples: [COAST_TABLE] })

/** Rolling and drag from logged runs; nothing is saved. */
export function coastDownRoute(api: Api, { store, compute }: Needs): void {
  takeBodies(api, ['json', 'csv'])
  const schema = {
    tags: ['coast-down'],
    summary: 'Find rolling and drag from logged coast-down runs; nothing is saved',
    description:
      'Runs both ways over one road find a steady wind and slope too. Runs that do not tell rolling from drag are refused with the reasons (cannot-fit). Beside a table, car and air stand in the query; a JSON document holds them itself. Test on a closed road or with permission; a second person logs.',
    querystring: coastQuery,
    body: { content: { 'application/json': { schema: coastDownRequest }, 'text/csv': { schema: table } } },
    response: answers({ 200: { description: 'what the runs tell', schema: answer } }, [
      'bad-query',
      'bad-json',
      'empty-body',
      'invalid-document',
      'invalid-file',
      'missing-document',
      'cannot-fit',
      ...WRITE_ERRORS,
      ...COMPUTE_ERRORS,
      ...STORE_ERRORS,
    ]),
  }
  api.post('/coast-down', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const format = formatOf(request.headers['content-type'])
    const body = { format, bytes: bytesOf(request.body), ...coastOptions(format, request.query) }
    const { request: test, notices } = await compute.run('read-coast-down', body, signal)
    const stored = test.car === undefined ? null : await named(store, 'car', test.car.id, 'car.id')
    const car = stored === null ? null : { id: stored.id, version: stored.version, body: stored.body }
    return { result: await compute.run('coast-down', { request: test, car }, signal), notices }
  })
}
