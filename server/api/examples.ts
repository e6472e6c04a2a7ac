import { z } from 'zod'
import { Fault } from '../errors.ts'
import { answers, listOf } from './answers.ts'
import type { Api } from './api.ts'
import { EXAMPLES } from './examples/all.ts'

const kinds = Object.keys(EXAMPLES)
const exampleEntry = z.strictObject({ kind: z.string(), title: z.string(), href: z.string() })

/** Worked examples of every document. */
export function exampleRoutes(api: Api): void {
  const listSchema = {
    tags: ['service'],
    summary: 'List the worked examples',
    querystring: z.strictObject({}),
    response: answers({ 200: { description: 'the examples', schema: listOf(exampleEntry) } }, ['bad-query']),
  }
  api.get('/examples', { schema: listSchema }, async () => ({
    items: Object.entries(EXAMPLES).map(([kind, { title }]) => ({ kind, title, href: `/api/v1/examples/${kind}` })),
  }))

  const oneSchema = {
    tags: ['service'],
    summary: 'Get a worked example, ready to be sent',
    params: z.strictObject({ kind: z.string().describe(kinds.join(', ')) }),
    querystring: z.strictObject({}),
    response: answers({ 200: { description: 'the document', schema: z.looseObject({}) } }, [
      'bad-query',
      'no-such-example',
    ]),
  }
  api.get('/examples/:kind', { schema: oneSchema }, async ({ params }) => {
    if (Object.hasOwn(EXAMPLES, params.kind)) return EXAMPLES[params.kind].document
    throw new Fault('no-such-example', `There is no example "${params.kind}"; expected ${kinds.join(' or ')}.`)
  })
}
