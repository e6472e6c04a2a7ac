import { z } from 'zod'
import { openWhatIf } from '../compute/what-if-jobs.ts'
import { whatIfDocument } from '../documents/what-if.ts'
import { answers } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'
import { STATELESS_ERRORS, wholeRequest } from './stateless-forecast.ts'

/** Quick answers on a day of documents that come with the request, or are named in it; nothing is saved. */
export function whatIfRoute(api: Api, needs: Needs): void {
  const { compute } = needs
  takeBodies(api, ['json'])
  const schema = {
    tags: ['plans'],
    summary: 'Say quickly what changes would do to the best plan; nothing is saved',
    description:
      'Takes the body of /plan without spreads, and up to 24 variants. The day is planned once; each variant is then refined from that plan by its tables and prices, within some per cent of a full plan: approximate, and said so.',
    querystring: z.strictObject({}),
    body: openWhatIf,
    response: answers({ 200: { description: 'the answers', schema: whatIfDocument } }, STATELESS_ERRORS),
  }
  api.post('/what-if', { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const signal = clientGone(reply)
    const { open, asked } = await compute.run('read-what-if', { bytes: bytesOf(request.body) }, signal)
    const whole = await wholeRequest(needs, { ...open, speeds: { kind: 'constant', speedKmh: 70 } }, signal)
    const { speeds: _speeds, ...documents } = whole
    const answer = await compute.run('what-if', { ...documents, ...asked }, signal)
    return reply.type('application/json; charset=utf-8').send(answer)
  })
}
