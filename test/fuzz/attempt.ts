import type { Request } from '../api/service.ts'
import { DOCUMENTS } from './bases.ts'
import type { Mutated } from './json-mutation.ts'

export type Kind = keyof typeof DOCUMENTS

/** One request of the suite, and what is known of it before it is sent. */
export interface Attempt {
  request: Request
  what: string
  /** Valid but for one field, one byte or one parameter. */
  isOneOff: boolean
  /** Nothing may be accepted so. */
  isWrong: boolean
  /** Field that a refusal must name, where it is known. */
  names: string | null
  /** Document, or race's forecasts, that it would change. */
  touches: { kind: Kind | 'forecast'; id: string } | null
  /** Kind of document that an answer without error tells of, to be forecast with. */
  yields: Kind | 'budget' | 'tracker-days' | 'pointing' | null
}

export const COLLECTIONS: Record<Kind, string> = { car: 'cars', route: 'routes', race: 'races', sky: 'skies' }

/** An attempt with a body. */
export function sent(
  method: 'PUT' | 'POST',
  url: string,
  type: string,
  mutated: Mutated & { isOneOff: boolean },
  rest: Pick<Attempt, 'touches' | 'yields'> & { ifMatch?: string },
): Attempt {
  const { body, ...known } = mutated
  const headers = { 'content-type': type, ...(rest.ifMatch === undefined ? {} : { 'if-match': rest.ifMatch }) }
  const { touches, yields } = rest
  return { ...known, touches, yields, request: { method, url, headers, payload: body } }
}

/** The request as somebody would type it. */
export function typed({ method = 'GET', url, headers = {}, payload }: Request): string {
  const named = Object.entries(headers).map(([name, value]) => `-H ${quoted(`${name}: ${String(value)}`)}`)
  const address = quoted(`http://127.0.0.1:8080${String(url)}`)
  const start = `curl -g -X ${method} ${address} ${named.join(' ')}`.trim()
  if (payload === undefined) return start
  const bytes = Buffer.isBuffer(payload)
    ? payload
    : Buffer.from(typeof payload === 'string' ? payload : JSON.stringify(payload))
  const isPlain =
    Buffer.from(bytes.toString()).equals(bytes) && !/\p{Control}/u.test(bytes.toString().replaceAll('\n', ''))
  return isPlain
    ? `${start} --data-binary ${quoted(bytes.toString())}`
    : `printf %s ${bytes.toString('base64')} | base64 -d | ${start} --data-binary @-`
}

const quoted = (text: string): string => `'${text.replaceAll("'", "'\\''")}'`
