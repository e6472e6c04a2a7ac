/** What can go wrong with the store, by a short stable name. */
export type StoreErrorCode =
  | 'data-folder-in-use'
  | 'data-folder-unwritable'
  | 'data-folder-full'
  | 'data-folder-unreadable'
  | 'database-unreachable'
  | 'database-stopped'
  | 'query-too-long'
  | 'sql-inside-transaction'
  | 'transaction-ended'
  | 'migration-misnamed'
  | 'migration-changed'
  | 'migration-unknown'
  | 'migration-late'
  | 'migration-failed'
  | 'field-not-storable'
  | 'forecast-id-taken'

/** A fault of the store in words for the person who runs the service; `code` says which. */
export class StoreError extends Error {
  readonly code: StoreErrorCode
  /** Path of the field at fault, where one field is. */
  readonly field: string | null

  /**
   * @param code     which fault
   * @param message  plain sentences: what is wrong and what to do
   * @param more     the cause, and the path of the field at fault
   */
  constructor(code: StoreErrorCode, message: string, more: { cause?: unknown; field?: string } = {}) {
    super(message, { cause: more.cause })
    this.name = 'StoreError'
    this.code = code
    this.field = more.field ?? null
  }
}

/** The `code` of a system, client or PostgreSQL error; '' where it has none. */
export function errorCode(error: unknown): string {
  const code = typeof error === 'object' && error !== null && 'code' in error ? error.code : ''
  return typeof code === 'string' ? code : ''
}

/** The message of anything thrown. */
export const errorMessage = (error: unknown): string => (error instanceof Error ? error.message : String(error))

// PostgreSQL 15, appendix A: class 08 connection, 53100 disk full, 53300 too many connections,
// 57014 query cancelled, 57P01..57P05 shutdown, not ready, idle for too long.
const FAULTS: [codes: RegExp, code: StoreErrorCode, message: string][] = [
  [/^53100$/, 'data-folder-full', 'The disk of the database is full. Free some space, then try again.'],
  [/^57014$/, 'query-too-long', 'The database did not answer in time. Try again; if it stays so, look at its load.'],
  [/^25P03$/, 'transaction-ended', 'A transaction waited too long between two statements and was rolled back.'],
  [
    /^(57P0[1-5]|ECONNRESET|EPIPE|CONNECTION_(CLOSED|DESTROYED|ENDED))$/,
    'database-stopped',
    'The connection to the database was lost. Try again in a few seconds.',
  ],
  [
    /^(08...|53300|ECONN.*|ETIMEDOUT|EHOSTUNREACH|ENETUNREACH|ENOTFOUND|EAI_AGAIN|CONNECT_TIMEOUT)$/,
    'database-unreachable',
    'The database cannot be reached. Check that it runs and that DATABASE_URL points at it, then try again.',
  ],
]

/**
 * The fault of the store behind an error of the client or the database, for the service's error table.
 *
 * @param error  anything thrown by a query
 * @returns a StoreError; null when the error is no fault of the database itself (a bug, then)
 */
export function storeFault(error: unknown): StoreError | null {
  if (error instanceof StoreError) return error
  const code = errorCode(error)
  const fault = FAULTS.find(([codes]) => codes.test(code))
  return fault === undefined ? null : new StoreError(fault[1], fault[2], { cause: error })
}
