import { AsyncLocalStorage } from 'node:async_hooks'
import type postgres from 'postgres'
import { StoreError } from './store-error.ts'

/** The client, as the stores use it. */
export type Sql = postgres.Sql
/** A piece of a statement. */
export type Fragment = postgres.PendingQuery<postgres.Row[]>
/** The client inside `sql.begin`. */
export type TransactionSql = postgres.TransactionSql

/** One transaction of this process. */
interface Scope {
  isOpen: boolean
  /** What its work failed by, if it did. */
  failure: { error: unknown } | null
}

/** What the client runs a statement by; internal to it, hence the narrow look. */
interface PendingQuery {
  handler: (query: PendingQuery) => void
  reject: (error: unknown) => void
}

type Work = (tx: TransactionSql) => unknown

const scopes = new AsyncLocalStorage<Scope>()

const insideTransaction = (): StoreError | null =>
  scopes.getStore()?.isOpen === true
    ? new StoreError(
        'sql-inside-transaction',
        'A statement was sent outside the transaction that its own code has open; ' +
          'with one connection it would wait for ever. Use the transaction handed to the callback.',
      )
    : null

const afterTransaction = (scope: Scope) => (): StoreError | null =>
  scope.isOpen ? null : new StoreError('transaction-ended', 'This transaction has ended: its connection was lost.')

/**
 * The client with two of its traps closed. A statement on `sql` inside `sql.begin`, which hangs where there
 * is one connection, is an immediate error on every engine. And a transaction whose connection was lost
 * never touches that connection again, which would end the process by an uncaught error.
 */
export function guardSql(raw: Sql): Sql {
  const refuse = async (): Promise<void> => {
    const refusal = insideTransaction()
    if (refusal !== null) throw refusal
  }
  return watched(raw, insideTransaction, {
    begin: (first: string | Work, second?: Work) => refuse().then(() => begin(raw, first, second)),
    reserve: () => refuse().then(() => raw.reserve()),
    notify: (channel: string, payload: string) => refuse().then(() => raw.notify(channel, payload)),
  })
}

async function begin(raw: Sql, first: string | Work, second?: Work): Promise<unknown> {
  const scope: Scope = { isOpen: true, failure: null }
  const note = (error: unknown): void => {
    scope.failure = { error }
  }
  const run = (work: Work) => (tx: TransactionSql) => scopes.run(scope, () => settled(scope, tx, work, note))
  try {
    if (typeof first === 'function') return await raw.begin(run(first))
    return await raw.begin(first, run(second ?? (() => null)))
  } catch (error) {
    scope.isOpen = false
    // A lost connection ends the transaction before its work hears why; the why says more.
    await turn()
    throw scope.failure === null ? error : scope.failure.error
  } finally {
    scope.isOpen = false
  }
}

/**
 * The work's outcome; none at all when the connection was lost meanwhile, because the client would
 * answer any outcome by writing COMMIT or ROLLBACK to a closed socket.
 */
async function settled(scope: Scope, tx: TransactionSql, work: Work, note: (error: unknown) => void): Promise<unknown> {
  const run = async (): Promise<unknown> => {
    const value = await work(guardTransaction(tx, scope))
    return Array.isArray(value) ? Promise.all(value) : value
  }
  const outcome = await run().then(
    (value) => () => value,
    (error: unknown) => {
      note(error)
      return () => {
        throw error
      }
    },
  )
  // The loss of the connection is known one turn later than its failed statement.
  await turn()
  if (!scope.isOpen) await new Promise(() => {})
  return outcome()
}

function guardTransaction(tx: TransactionSql, scope: Scope): TransactionSql {
  // A savepoint's failure is its caller's to judge.
  const run = (work: Work) => (inner: TransactionSql) => settled(scope, inner, work, () => {})
  return watched(tx, afterTransaction(scope), {
    savepoint: (first: string | Work, second?: Work) =>
      typeof first === 'function' ? tx.savepoint(run(first)) : tx.savepoint(first, run(second ?? (() => null))),
  })
}

/** One turn of the event loop. */
const turn = (): Promise<void> => new Promise((resolve) => setImmediate(resolve))

/** The client with a check before each statement, and with some of its members replaced. */
function watched<T extends Sql | TransactionSql>(
  client: T,
  check: () => StoreError | null,
  members: Record<string, unknown>,
): T {
  return new Proxy(client, {
    apply: (target, _self, parameters: unknown[]) => checkedQuery(Reflect.apply(target, undefined, parameters), check),
    get: (target, key): unknown => {
      if (typeof key === 'string' && key in members) return members[key]
      const member: unknown = Reflect.get(target, key)
      if (typeof member !== 'function' || (key !== 'unsafe' && key !== 'file')) return member
      return (...parameters: unknown[]) => checkedQuery(Reflect.apply(member, target, parameters), check)
    },
  })
}

/** A statement that asks `check` at the moment it is sent; fragments and values pass as they are. */
function checkedQuery(result: unknown, check: () => StoreError | null): unknown {
  if (!isPending(result)) return result
  const send = result.handler
  result.handler = (pending) => {
    const refusal = check()
    if (refusal === null) send(pending)
    else pending.reject(refusal)
  }
  return result
}

const isPending = (value: unknown): value is PendingQuery =>
  value instanceof Promise && 'handler' in value && 'reject' in value
