import type postgres from 'postgres'
import type { Fragment, Sql } from './guarded-sql.ts'
import { errorCode, StoreError } from './store-error.ts'

/** A document's version as PostgreSQL's integer can hold it. */
export const isVersion = (version: number): boolean =>
  Number.isInteger(version) && version >= 1 && version <= 2_147_483_647

/** A document's id: a slug of 1 to 64 letters, digits and hyphens. */
export const isSlug = (id: string): boolean => /^[a-z0-9-]{1,64}$/.test(id)

export const isUuid = (id: string): boolean => /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i.test(id)

/** A day as YYYY-MM-DD that the calendar has. */
export const isDay = (date: string): boolean => /^\d{4}-\d\d-\d\d$/.test(date) && isCalendarDay(date)

const isCalendarDay = (date: string): boolean => {
  const at = new Date(`${date}T00:00:00Z`)
  return !Number.isNaN(at.getTime()) && at.toISOString().startsWith(date)
}

/** A SHA-256 in lower-case hexadecimal digits. */
export const isSha256 = (hash: string): boolean => /^[0-9a-f]{64}$/.test(hash)

/**
 * Lets a value through that fits its column.
 *
 * @throws StoreError field-not-storable when a value does not fit its column
 */
export function checkField(field: string, value: unknown, fits: boolean, expected: string): void {
  if (fits) return
  const shown = typeof value === 'string' ? `'${value.slice(0, 80)}'` : String(value)
  throw new StoreError('field-not-storable', `${field}: ${shown}; expected ${expected}.`, { field })
}

/** Lets through who acted: the id of a link or, once there are any, of a person; null where nobody is known. */
export const checkBy = (by: string | null): void => checkField('by', by, by === null || isUuid(by), 'a UUID or null')

/** The value for a column of JSON. */
export function json(sql: Sql, field: string, value: unknown): postgres.Parameter {
  if (!isJson(value)) throw new StoreError('field-not-storable', `${field}: not a value of JSON.`, { field })
  return sql.json(value)
}

const isJson = (value: unknown): value is postgres.JSONValue =>
  !['undefined', 'function', 'symbol', 'bigint'].includes(typeof value)

/** A row that must be there already. [PostgreSQL 15, appendix A: foreign_key_violation] */
const NO_SUCH_ROW = '23503'

// Invalid JSON text, invalid byte sequence, untranslatable character. [PostgreSQL 15, appendix A]
const NOT_STORABLE = ['22P02', '22021', '22P05']

/**
 * Runs a statement that saves values; text that PostgreSQL cannot hold, and the id of a row that is not there,
 * become a fault naming their field.
 *
 * @param values  what is saved, by the names that the caller knows
 * @throws StoreError field-not-storable: a NUL character, half of a surrogate pair, an unknown id
 */
export async function saving<T>(values: Record<string, unknown>, run: () => Promise<T>): Promise<T> {
  try {
    return await run()
  } catch (error) {
    if (errorCode(error) === NO_SUCH_ROW) throw noSuchRow(error)
    const field = NOT_STORABLE.includes(errorCode(error)) ? unstorableField(values, '') : null
    if (field === null) throw error
    throw new StoreError(
      'field-not-storable',
      `${field}: holds a NUL character or half of a character pair, which cannot be stored; expected plain text.`,
      { cause: error, field },
    )
  }
}

/** PostgreSQL names a foreign key after its columns: table_race_id_reading_id_fkey. */
function noSuchRow(error: unknown): StoreError {
  const isNamed = typeof error === 'object' && error !== null && 'constraint_name' in error
  const column = /_([a-z]+)_id_fkey$/.exec(isNamed ? String(error.constraint_name) : '')?.[1] ?? 'row'
  const message = `${column}Id: nothing of this id is kept; expected the id of a saved ${column}.`
  return new StoreError('field-not-storable', message, { cause: error, field: `${column}Id` })
}

const isStorable = (text: string): boolean => !text.includes('\0') && !/\p{Surrogate}/u.test(text)

/** Path of the first text, or name of a field, that PostgreSQL cannot hold. */
function unstorableField(value: unknown, path: string): string | null {
  if (typeof value === 'string') return isStorable(value) ? null : path
  if (typeof value !== 'object' || value === null) return null
  for (const [key, inner] of Object.entries(value)) {
    const at = Array.isArray(value) ? `${path}[${key}]` : `${path}${path === '' ? '' : '.'}${key}`
    if (!isStorable(key)) return `${path}: the name of a field`
    const found = unstorableField(inner, at)
    if (found !== null) return found
  }
  return null
}

/** An instant's column as ISO 8601 in UTC, to the millisecond. */
export const utc = (sql: Sql, column: string): Fragment =>
  sql`to_char(${sql(column)} at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"')`
