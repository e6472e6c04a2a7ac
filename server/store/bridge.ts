import {
  ANSWER,
  answerFrames,
  type Batch,
  endsReady,
  errorFrame,
  isFatal,
  lastWords,
  queryFrame,
  SYNC,
  withCopyFail,
} from './wire.ts'

/** The one session that all clients of the embedded engine share. */
export interface Session {
  /** Runs whole messages; the answer's bytes. */
  run(bytes: Uint8Array, limitMs: number): Promise<Buffer>
  isInTransaction(): boolean
}

/** Where one client's answers go; `answered` is how many of its batches they complete. */
export interface ClientEnd {
  answer(bytes: Buffer, answered: number): void
  left(): void
}

export interface BridgeLimits {
  /** A statement. [ms] */
  statementMs: number
  /** A transaction between two statements. [ms] */
  idleMs: number
}

export interface Bridge {
  join(end: ClientEnd): { send(batch: Batch): void; leave(): void }
  /** Runs one statement of housekeeping when no transaction is open. */
  tidy(statement: string, limitMs: number): Promise<void>
}

interface Client {
  end: ClientEnd
  batches: Batch[]
  limitMs: number
}

const NOTHING = Buffer.alloc(0)
const FAREWELL: Batch = { bytes: NOTHING, isSync: false, isFarewell: true, namesStdin: false }

/**
 * Shares one session among many clients, one at a time: a client owns the session from its first message
 * until, after a Query or Sync, no transaction is open. So no client ever sees another one's rows.
 *
 * @param onBroken  called once when the engine stops answering; the bridge is of no use afterwards
 */
export function bridge(session: Session, limits: BridgeLimits, onBroken: (error: unknown) => void): Bridge {
  const clients = new Set<Client>()
  let owner: Client | null = null
  let isAtWork = false
  let idleTimer: NodeJS.Timeout | undefined

  const next = (): { client: Client; batch: Batch } | null => {
    for (const client of owner === null ? clients : [owner]) {
      const batch = client.batches.shift()
      if (batch !== undefined) return { client, batch }
    }
    return null
  }

  const work = async (): Promise<void> => {
    if (isAtWork) return
    isAtWork = true
    try {
      for (let turn = next(); turn !== null; turn = next()) await serve(turn.client, turn.batch)
      isAtWork = false
    } catch (error) {
      onBroken(error)
    }
  }

  const serve = async (client: Client, batch: Batch): Promise<void> => {
    clearTimeout(idleTimer)
    if (batch.isFarewell) return depart(client)
    owner = client
    await run(client, batch)
    if (!batch.isSync) return
    if (session.isInTransaction()) {
      idleTimer = setTimeout(() => evict(client), limits.idleMs)
    } else {
      owner = null
      // To the back of the queue, so that a busy client does not starve the others.
      if (clients.delete(client)) clients.add(client)
    }
  }

  const run = async (client: Client, batch: Batch): Promise<void> => {
    const answer = await session.run(batch.namesStdin ? withCopyFail(batch.bytes) : batch.bytes, client.limitMs)
    if (batch.isSync && !endsReady(answer)) throw new Error('the engine stopped answering')
    client.end.answer(batch.namesStdin ? withoutCopyIn(answer) : answer, 1)
    for (const { type, frame } of answerFrames(answer)) {
      // The engine answers such a fault and then hangs at the next statement.
      if (type === ANSWER.error && isFatal(frame)) throw new Error(lastWords(frame))
      if (type !== ANSWER.notification) continue
      for (const other of clients) if (other !== client) other.end.answer(frame, 0)
    }
  }

  const depart = async (client: Client): Promise<void> => {
    if (!clients.delete(client)) return
    // A client that left in the middle of a batch may have left an error that only Sync ends.
    if (owner === client) await session.run(SYNC, limits.statementMs)
    owner = null
    if (session.isInTransaction()) await session.run(queryFrame('ROLLBACK'), limits.statementMs)
    if (clients.size === 0) await session.run(queryFrame('DISCARD ALL'), limits.statementMs)
    client.end.left()
  }

  const evict = (client: Client): void => {
    const message = 'terminating connection due to idle-in-transaction timeout'
    client.end.answer(errorFrame('25P03', message), 0)
    client.batches = [FAREWELL]
    void work()
  }

  const join = (end: ClientEnd, limitMs: number): ReturnType<Bridge['join']> => {
    const client: Client = { end, batches: [], limitMs }
    clients.add(client)
    const send = (batch: Batch): void => {
      client.batches.push(batch)
      void work()
    }
    return { send, leave: () => send(FAREWELL) }
  }

  const tidy = (statement: string, limitMs: number): Promise<void> =>
    new Promise((resolve) => {
      const place = join({ answer: () => place.leave(), left: resolve }, limitMs)
      place.send({ bytes: queryFrame(statement), isSync: true, isFarewell: false, namesStdin: false })
    })

  return { join: (end) => join(end, limits.statementMs), tidy }
}

const NO_COPY = errorFrame('0A000', 'COPY FROM STDIN is not available on the embedded database')

/** The answer with a plain refusal in place of CopyInResponse and the failure that follows it. */
function withoutCopyIn(answer: Buffer): Buffer {
  const isRefused = Array.from(answerFrames(answer)).some(({ type }) => type === ANSWER.copyIn)
  if (!isRefused) return answer
  const kept = Array.from(answerFrames(answer), ({ type, frame }) => {
    if (type === ANSWER.copyIn) return NOTHING
    return type === ANSWER.error ? NO_COPY : frame
  })
  return Buffer.concat(kept)
}
