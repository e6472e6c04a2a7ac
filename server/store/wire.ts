/** The few parts of PostgreSQL's wire protocol that the bridge needs. @source PostgreSQL 15 manual, chapter 55. */

const SSL_REQUEST = 80877103
const CANCEL_REQUEST = 80877102
const TYPE = { query: 0x51, parse: 0x50, sync: 0x53, flush: 0x48, terminate: 0x58 } as const

/** First byte of the answers that the bridge looks at. */
export const ANSWER = { ready: 0x5a, notification: 0x41, copyIn: 0x47, error: 0x45 } as const

/** What one client sends at a time: whole messages up to and with a Query, Sync or Flush; or its farewell. */
export interface Batch {
  bytes: Uint8Array
  /** True when the answer ends with ReadyForQuery. */
  isSync: boolean
  isFarewell: boolean
  /** True when its SQL names stdin, as every COPY … FROM STDIN does. */
  namesStdin: boolean
}

const farewell = (): Batch => ({ bytes: new Uint8Array(0), isSync: false, isFarewell: true, namesStdin: false })

/**
 * Cuts one connection's bytes into batches.
 *
 * @param say  called with the answer to a request for encryption, which the bridge declines
 */
export function batchCutter(say: (bytes: Buffer) => void): (bytes: Uint8Array) => Batch[] {
  let rest = Buffer.alloc(0)
  let open: Buffer[] = []
  let isStarted = false
  let namesStdin = false

  const startup = (frame: Buffer): Batch[] => {
    const request = frame.readInt32BE(4)
    if (request === SSL_REQUEST) say(Buffer.from('N'))
    if (request === CANCEL_REQUEST) return [farewell()]
    if (request === SSL_REQUEST) return []
    isStarted = true
    return [{ bytes: frame, isSync: true, isFarewell: false, namesStdin: false }]
  }

  const message = (frame: Buffer): Batch[] => {
    const type = frame[0]
    if (type === TYPE.terminate) return [farewell()]
    open.push(frame)
    // Once named, always suspected: a prepared COPY runs again by its statement's name alone.
    if (type === TYPE.query || type === TYPE.parse) namesStdin ||= /stdin/i.test(frame.toString('latin1'))
    if (type !== TYPE.query && type !== TYPE.sync && type !== TYPE.flush) return []
    const bytes = open.length === 1 ? frame : Buffer.concat(open)
    open = []
    return [{ bytes, isSync: type !== TYPE.flush, isFarewell: false, namesStdin }]
  }

  return (bytes) => {
    rest = rest.length > 0 ? Buffer.concat([rest, bytes]) : Buffer.from(bytes)
    const batches: Batch[] = []
    for (;;) {
      // A start-up packet has no type byte; before it, anything that has one is left over from the
      // client's previous connection (it keeps an unsent write when a socket closes).
      const isStale = !isStarted && rest.length > 0 && rest[0] !== 0
      const head = isStarted || isStale ? 1 : 0
      if (rest.length < head + 4) return batches
      const length = head + rest.readInt32BE(head)
      if (rest.length < length) return batches
      const frame = rest.subarray(0, length)
      rest = rest.subarray(length)
      if (!isStale) batches.push(...(isStarted ? message(frame) : startup(frame)))
    }
  }
}

/** The whole messages in an answer, each with its type byte. */
export function* answerFrames(bytes: Buffer): Generator<{ type: number; frame: Buffer }> {
  for (let at = 0; at + 5 <= bytes.length; ) {
    const end = at + 1 + bytes.readInt32BE(at + 1)
    yield { type: bytes[at], frame: bytes.subarray(at, end) }
    at = end
  }
}

/** True when an answer's last message is ReadyForQuery. */
export const endsReady = (bytes: Buffer): boolean =>
  bytes.length >= 6 && bytes[bytes.length - 6] === ANSWER.ready && bytes.readInt32BE(bytes.length - 5) === 5

/** A message of the given type. */
export function frame(type: string, body: string): Buffer {
  const content = Buffer.from(body)
  const head = Buffer.alloc(5)
  head.write(type, 0, 'latin1')
  head.writeInt32BE(4 + content.length, 1)
  return Buffer.concat([head, content])
}

/** A simple query. */
export const queryFrame = (text: string): Buffer => frame('Q', `${text}\0`)

/** Ends a batch of the extended protocol. */
export const SYNC = frame('S', '')

/** ReadyForQuery outside a transaction. */
export const READY = frame('Z', 'I')

/** ErrorResponse with a SQLSTATE code and a message. */
export const errorFrame = (code: string, message: string): Buffer =>
  frame('E', `SERROR\0VERROR\0C${code}\0M${message}\0\0`)

/** True for an ErrorResponse after which a session is over. */
export const isFatal = (error: Buffer): boolean => /\0V(FATAL|PANIC)\0/.test(error.toString('latin1'))

/** The message in an ErrorResponse. */
export const lastWords = (error: Buffer): string => /\0M([^\0]*)\0/.exec(error.toString())?.[1] ?? 'no reason given'

const COPY_FAIL = frame('f', 'copying in from the client is not available on the embedded database\0')

/**
 * The batch with a CopyFail where a COPY … FROM STDIN would wait for its rows, which the embedded engine
 * cannot do; PostgreSQL ignores a CopyFail that nothing waits for.
 */
export function withCopyFail(bytes: Uint8Array): Buffer {
  const batch = Buffer.from(bytes)
  if (batch[0] === TYPE.query) return Buffer.concat([batch, COPY_FAIL])
  const end = batch.length - 5
  return Buffer.concat([batch.subarray(0, end), COPY_FAIL, batch.subarray(end)])
}
