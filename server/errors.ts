import type { Problem } from './documents/problem.ts'

/** Every error that an answer may carry: its status and what it is in a few words. The one table of them. */
export const ERRORS = {
  'bad-request': { status: 400, title: 'The request is malformed' },
  'bad-address': { status: 400, title: 'The address is malformed' },
  'bad-id': { status: 400, title: 'An id in the address is malformed' },
  'bad-query': { status: 400, title: 'A query parameter is wrong' },
  'bad-precondition': { status: 400, title: 'If-Match or If-None-Match is malformed' },
  'bad-json': { status: 400, title: 'The body is not JSON' },
  'empty-body': { status: 400, title: 'The body is empty' },
  'not-signed-in': { status: 401, title: 'This needs the owner’s link' },
  'link-revoked': { status: 401, title: 'The link was revoked' },
  'not-shared': { status: 403, title: 'This link does not open that' },
  'other-host': { status: 403, title: 'The request was meant for another host' },
  'other-origin': { status: 403, title: 'Another site sent this request' },
  'not-found': { status: 404, title: 'There is nothing at this address' },
  'no-such-document': { status: 404, title: 'There is no such document' },
  'no-such-version': { status: 404, title: 'There is no such version' },
  'no-such-day': { status: 404, title: 'The race has no such day' },
  'no-such-forecast': { status: 404, title: 'There is no such forecast' },
  'no-such-plan': { status: 404, title: 'There is no such plan' },
  'no-such-variant': { status: 404, title: 'There is no such variant' },
  'no-such-reading': { status: 404, title: 'There is no such reading' },
  'no-such-share': { status: 404, title: 'There is no such share link' },
  'nothing-followed': { status: 404, title: 'No budget is followed yet' },
  'no-such-example': { status: 404, title: 'There is no such example' },
  'method-not-allowed': { status: 405, title: 'This address does not know this method' },
  'request-timeout': { status: 408, title: 'The request did not arrive in time' },
  'reading-taken': { status: 409, title: 'Another reading has this id' },
  'plan-unfinished': { status: 409, title: 'The plan is not worked out' },
  'plan-outdated': { status: 409, title: 'The plan was made from what no longer holds' },
  'version-changed': { status: 412, title: 'The document has changed since it was read' },
  'too-large': { status: 413, title: 'The body is too large' },
  'too-complex': { status: 413, title: 'The body is too much work' },
  'address-too-long': { status: 414, title: 'The address is too long' },
  'unsupported-media-type': { status: 415, title: 'This kind of content is not read here' },
  'invalid-document': { status: 422, title: 'The document has errors' },
  'invalid-file': { status: 422, title: 'The file has errors' },
  'missing-document': { status: 422, title: 'A document that the request names does not exist' },
  'missing-route': { status: 422, title: 'A stage runs on a route that does not exist' },
  'cannot-forecast': { status: 422, title: 'These documents cannot be forecast together' },
  'cannot-compare': { status: 422, title: 'These skies cannot be compared' },
  'cannot-fit': { status: 422, title: 'These runs do not tell rolling from drag' },
  'precondition-required': { status: 428, title: 'Replacing a document needs the version that was read' },
  'headers-too-large': { status: 431, title: 'The headers are too large' },
  internal: { status: 500, title: 'Something went wrong in the service' },
  'compute-failed': { status: 500, title: 'The computation stopped unexpectedly' },
  'took-too-long': { status: 503, title: 'The computation took too long' },
  busy: { status: 503, title: 'Too many computations are waiting' },
  overloaded: { status: 503, title: 'The service is overloaded' },
  'store-unavailable': { status: 503, title: 'The database does not answer' },
  stopping: { status: 503, title: 'The service is stopping' },
} as const satisfies Record<string, { status: number; title: string }>

export type ErrorCode = keyof typeof ERRORS

/** Seconds after which a client may try again, for the errors that pass by themselves. */
const RETRY_AFTER_S = 5

interface FaultDetails {
  errors?: Problem[]
  headers?: Record<string, string>
  cause?: unknown
}

/** What is told to the client instead of an answer. `detail` is one plain sentence for people. */
export class Fault extends Error {
  readonly code: ErrorCode
  readonly errors: Problem[]
  readonly headers: Record<string, string>

  constructor(code: ErrorCode, detail: string, more: FaultDetails = {}) {
    super(detail, { cause: more.cause })
    this.name = 'Fault'
    this.code = code
    this.errors = more.errors ?? []
    this.headers = more.headers ?? (ERRORS[code].status === 503 ? { 'retry-after': String(RETRY_AFTER_S) } : {})
  }
}

/** Body of an error answer (RFC 9457). */
export interface ProblemAnswer {
  type: string
  title: string
  status: number
  detail: string
  code: ErrorCode
  errors: Problem[]
}

export const PROBLEM_TYPE = 'application/problem+json; charset=utf-8'

/** The error answer's body for a fault. */
export function problemAnswer(fault: Fault): ProblemAnswer {
  const { status, title } = ERRORS[fault.code]
  const type = `urn:stagewatt:problem:${fault.code}`
  return { type, title, status, detail: fault.message, code: fault.code, errors: fault.errors }
}

/** `1 error` or `3 errors`, for the sentence above a list. */
export const counted = (n: number, what: string): string => `${n} ${what}${n === 1 ? '' : 's'}`
