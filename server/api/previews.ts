import { z } from 'zod'
import { answers, COMPUTE_ERRORS, notice, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bodyContent, bytesOf, formatOf, takeBodies } from './content.ts'
import { fileErrors } from './documents.ts'
import { readerOptions } from './file-options.ts'
import type { KindRoutes } from './kinds.ts'

/** Reading a file or document without saving it: what it holds, or every problem with line and column. */
export function previewRoute(api: Api, { compute }: Needs, kind: KindRoutes): void {
  takeBodies(api, kind.formats)
  const preview = z.strictObject({
    document: kind.schema,
    notices: z.array(notice),
    summary: z.unknown().describe('what a file held').optional(),
  })
  const schema = {
    tags: [kind.path],
    summary: `Read a ${kind.kind} without saving it`,
    querystring: kind.query,
    body: bodyContent(kind),
    response: answers({ 200: { description: 'what was read; nothing is saved', schema: preview } }, [
      'bad-query',
      'bad-json',
      'empty-body',
      'invalid-document',
      ...fileErrors(kind),
      ...WRITE_ERRORS,
      ...COMPUTE_ERRORS,
    ]),
  }
  api.post(`/${kind.path}/read`, { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const format = formatOf(request.headers['content-type'])
    const input = {
      kind: kind.kind,
      format,
      bytes: bytesOf(request.body),
      options: readerOptions(kind.kind, format, request.query),
    }
    const { document, notices, summary } = await compute.run('read-document', input, clientGone(reply))
    return { document, notices, summary }
  })
}
