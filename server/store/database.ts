import postgres from 'postgres'
import { type Embedded, openEmbedded } from './embedded.ts'
import { guardSql, type Sql } from './guarded-sql.ts'
import { errorMessage, StoreError } from './store-error.ts'

export type { Sql, TransactionSql } from './guarded-sql.ts'

export interface DatabaseOptions {
  /** Address of a PostgreSQL server; without it the embedded database of `dataDir` is used. */
  url?: string
  dataDir: string
  /** The compiled embedded-worker.js. */
  workerUrl: URL
  /** How long a statement, and a transaction between two statements, may take. [ms] (default 15 s each) */
  statementMs?: number
  idleMs?: number
  /** How long a server may take to let us in. [ms] (default 10 s) */
  connectMs?: number
  /** Connections to a server. (default 10) */
  max?: number
}

export interface Database {
  sql: Sql
  kind: 'server' | 'embedded'
  isEmbedded: boolean
  /** Times that the embedded engine forced a file to the disk; 0 on a server. */
  syncCount: () => number
  close: () => Promise<void>
}

const LIMIT_MS = 15_000
const CLOSE_WITHIN_S = 5
const CONNECT_MS = 10_000

// The client keeps an unsent statement when its socket closes and then never writes again, unless what it
// writes next is at least 1,024 bytes: so its first message on a connection is that long. (The bridge skips
// the leftover; a server refuses it, and the client connects once more.)
const LONG_NAME = `stagewatt${' '.repeat(1024)}`

const COMMON = { onnotice: () => {}, transform: { undefined: null }, connect_timeout: CONNECT_MS / 1000 } as const

/**
 * The service's database: the server at `url`, or else the embedded one.
 *
 * @throws StoreError when it cannot be reached or opened; its message is for the person who starts the service
 */
export const openDatabase = (options: DatabaseOptions): Promise<Database> =>
  options.url === undefined || options.url === '' ? openLocal(options) : openServer(options, options.url)

async function openServer(options: DatabaseOptions, url: string): Promise<Database> {
  const raw = serverClient(options, url)
  try {
    await answered(raw, options.connectMs ?? CONNECT_MS)
  } catch (error) {
    await raw.end({ timeout: 0 })
    throw unreachable(url, error)
  }
  const close = (): Promise<void> => raw.end({ timeout: CLOSE_WITHIN_S })
  return { sql: guardSql(raw), kind: 'server', isEmbedded: false, syncCount: () => 0, close }
}

/** The first answer, or a refusal in time: the client itself never gives up on a server that hangs up at once. */
async function answered(raw: Sql, withinMs: number): Promise<void> {
  let timer: NodeJS.Timeout | undefined
  const late = new Promise<never>((_, reject) => {
    const giveUp = (): void => reject(new Error(`no answer within ${withinMs / 1000} s`))
    timer = setTimeout(giveUp, withinMs)
  })
  try {
    await Promise.race([raw`select 1`, late])
  } finally {
    clearTimeout(timer)
  }
}

function serverClient(options: DatabaseOptions, url: string): Sql {
  try {
    return postgres(url, {
      ...COMMON,
      max: options.max ?? 10,
      connection: {
        application_name: LONG_NAME,
        TimeZone: 'UTC',
        statement_timeout: options.statementMs ?? LIMIT_MS,
        idle_in_transaction_session_timeout: options.idleMs ?? LIMIT_MS,
      },
    })
  } catch (error) {
    throw unreachable(url, error)
  }
}

async function openLocal(options: DatabaseOptions): Promise<Database> {
  const limits = { statementMs: options.statementMs ?? LIMIT_MS, idleMs: options.idleMs ?? LIMIT_MS }
  const engine = await openEmbedded({ dataDir: options.dataDir, workerUrl: options.workerUrl, limits })
  const raw = embeddedClient(engine)
  const close = async (): Promise<void> => {
    await raw.end({ timeout: CLOSE_WITHIN_S })
    await engine.stop()
  }
  return { sql: guardSql(raw), kind: 'embedded', isEmbedded: true, syncCount: engine.syncCount, close }
}

/** A client of the embedded engine: one connection, since there is one session. */
export function embeddedClient(engine: Embedded): Sql {
  // The client knows `socket`, its published types do not.
  const options = {
    ...COMMON,
    socket: engine.socket,
    user: 'postgres',
    database: 'postgres',
    max: 1,
    max_lifetime: null,
    backoff: () => 0.2,
    connection: { application_name: LONG_NAME },
  }
  return postgres(options)
}

/** Says which server, without its password. */
function unreachable(url: string, cause: unknown): StoreError {
  const place = URL.canParse(url) ? `${new URL(url).host}${new URL(url).pathname}` : 'an address that cannot be read'
  return new StoreError(
    'database-unreachable',
    `The PostgreSQL server of DATABASE_URL (${place}) did not let us in: ${reason(cause)}. ` +
      'Check that it runs and that the address, user and password are right.',
    { cause },
  )
}

// A failed connection to a name with several addresses carries its reasons inside.
const reason = (cause: unknown): string =>
  cause instanceof AggregateError ? cause.errors.map(errorMessage).join('; ') : errorMessage(cause)
