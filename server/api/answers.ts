import { z } from 'zod'
import { ERRORS, type ErrorCode } from '../errors.ts'

export const problemSchema = z
  .strictObject({
    type: z.string().describe('name of the kind of error (URN)'),
    title: z.string().describe('the kind of error in a few words'),
    status: z.int().describe('HTTP status'),
    detail: z.string().describe('one plain sentence about this occurrence'),
    code: z.enum(Object.keys(ERRORS)).describe('short stable name of the kind of error'),
    errors: z
      .array(
        z.strictObject({
          field: z
            .string()
            .describe('path of the field, for example panels[2].pitchDeg; for a file its column or element'),
          value: z.string().describe('what stood there, shortened').optional(),
          detail: z.string().describe('what was expected'),
          line: z.int().describe('line in the file, from 1').optional(),
          column: z.int().describe('column in the line, from 1').optional(),
        }),
      )
      .describe('one entry per wrong field'),
  })
  .describe('an error (RFC 9457)')

export const notice = z.strictObject({
  detail: z.string().describe('what the reader of a file did on its own, or what should be known'),
  line: z.int().optional(),
  column: z.int().optional(),
})

const at = z.string().describe('instant (ISO 8601, UTC)')

export const entry = z.strictObject({
  id: z.string(),
  name: z.string(),
  version: z.int().describe('counts up with every save'),
  savedAt: at,
})

export const versionEntry = z.strictObject({
  version: z.int(),
  name: z.string(),
  savedAt: at,
  isRemoved: z.boolean().describe('whether the document was taken away with this version as its last'),
})

export const listOf = <T extends z.ZodType>(item: T) => z.strictObject({ items: z.array(item) })

/** Errors that any address may answer. */
const ANYWHERE: ErrorCode[] = ['bad-request', 'internal', 'overloaded', 'stopping']
/** Errors of every address that is not open to all. */
const ACCESS_ERRORS: ErrorCode[] = ['not-signed-in', 'link-revoked', 'not-shared', 'store-unavailable']
/** Errors of every address that asks the database. */
export const STORE_ERRORS: ErrorCode[] = ['store-unavailable']
/** Errors of every address that computes. */
export const COMPUTE_ERRORS: ErrorCode[] = ['too-complex', 'busy', 'took-too-long', 'compute-failed']
/** Errors of every address that changes something or takes a body. */
export const WRITE_ERRORS: ErrorCode[] = [
  'other-host',
  'other-origin',
  'request-timeout',
  'too-large',
  'unsupported-media-type',
]

interface Good {
  description: string
  schema?: z.ZodType
  mediaType?: string
}

type Answer = { description: string; content?: Record<string, { schema: z.ZodType }> }

/**
 * A route's answers for its schema: the good ones, and its errors grouped by status.
 *
 * @param access  whether the address is open to all, without a link
 */
export function answers(
  good: Record<number, Good>,
  errors: ErrorCode[],
  access: 'open' | 'guarded' = 'guarded',
): Record<number, Answer> {
  const all: Record<number, Answer> = {}
  for (const [status, { description, schema, mediaType = 'application/json' }] of Object.entries(good))
    all[Number(status)] = { description, ...(schema === undefined ? {} : { content: { [mediaType]: { schema } } }) }
  const codes = [...errors, ...ANYWHERE, ...(access === 'open' ? [] : ACCESS_ERRORS)]
  for (const code of new Set(codes)) {
    const { status, title } = ERRORS[code]
    const line = `${code}: ${title}`
    const before = all[status]
    all[status] = {
      description: before === undefined ? line : `${before.description} · ${line}`,
      content: { 'application/problem+json': { schema: problemSchema } },
    }
  }
  return all
}
