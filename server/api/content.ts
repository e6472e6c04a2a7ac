import { z } from 'zod'
import type { Format } from '../compute/file-jobs.ts'
import { Fault } from '../errors.ts'
import type { Api } from './api.ts'

/** Media types that each format comes under. */
export const MEDIA_TYPES: Record<Format, string[]> = {
  json: ['application/json'],
  gpx: ['application/gpx+xml', 'application/xml', 'text/xml'],
  csv: ['text/csv'],
}

/**
 * Lets the routes of this scope take bodies in these formats and no other. Bodies stay bytes: reading
 * them is work for a worker.
 */
export function takeBodies(api: Api, formats: Format[]): void {
  const types = formats.flatMap((format) => MEDIA_TYPES[format])
  api.removeAllContentTypeParsers()
  api.addContentTypeParser(types, { parseAs: 'buffer' }, (_request, body, done) => done(null, body))
  api.addContentTypeParser('*', (request, _payload, done) => {
    done(unsupported(request.headers['content-type'], types))
  })
  // A body without a Content-Type never reaches a parser.
  api.addHook('preValidation', async (request) => {
    const takesBody = request.method === 'PUT' || request.method === 'POST'
    if (takesBody && !(request.body instanceof Uint8Array)) throw unsupported(request.headers['content-type'], types)
  })
}

function unsupported(given: string | undefined, types: string[]): Fault {
  const detail = `expected ${types.join(' or ')}`
  return new Fault('unsupported-media-type', `The body's Content-Type is ${given ?? 'not set'}; ${detail}.`, {
    errors: [{ field: 'Content-Type', ...(given === undefined ? {} : { value: given.slice(0, 60) }), detail }],
    headers: { accept: types.join(', ') },
  })
}

/** The format of a request's body by its media type. */
export function formatOf(contentType: string | undefined): Format {
  const type = (contentType ?? '').split(';')[0].trim().toLowerCase()
  const known = (['json', 'gpx', 'csv'] as const).find((format) => MEDIA_TYPES[format].includes(type))
  if (known === undefined) throw unsupported(contentType, [])
  return known
}

/** The bytes of a request's body. */
export const bytesOf = (body: unknown): Uint8Array => (body instanceof Uint8Array ? body : new Uint8Array())

/** What each media type of a kind's bodies holds, for its schema. */
export function bodyContent(kind: { schema: z.ZodType; formats: Format[] }) {
  const types = kind.formats.flatMap((format) => MEDIA_TYPES[format].map((type) => ({ format, type })))
  return {
    content: Object.fromEntries(
      types.map(({ format, type }) => [type, { schema: format === 'json' ? kind.schema : FILES[format] }]),
    ),
  }
}

const FILES = {
  gpx: z.string().describe('a GPX 1.1 file with a track or a route'),
  csv: z
    .string()
    .describe('a table with a header row: comma, semicolon or tab between cells; of a sky also an EPW or TMY3 file'),
}
