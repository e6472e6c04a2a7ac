import { createHash } from 'node:crypto'
import { readdir, readFile } from 'node:fs/promises'
import { join } from 'node:path'
import type { Sql, TransactionSql } from './guarded-sql.ts'
import { errorMessage, storeFault, StoreError } from './store-error.ts'

interface Migration {
  name: string
  text: string
  checksum: string
}

interface Applied {
  name: string
  checksum: string
}

const NAME = /^\d{3}-[a-z0-9-]+\.sql$/

/**
 * Brings the database's tables up to date by the files NNN-what.sql of a folder, in order, forward only,
 * each in a transaction of its own and under a lock, so that several processes may start at once.
 *
 * @param migrationsDir  path of the folder
 * @returns names of the files that were applied by this call
 * @throws StoreError migration-misnamed, -changed, -unknown, -late or -failed, naming the file
 */
export async function migrate(sql: Sql, migrationsDir: string): Promise<string[]> {
  const migrations = await readMigrations(migrationsDir)
  await inTurn(sql, async (tx) => {
    await tx`
      create table if not exists migrations (
        name text primary key, checksum text not null, applied_at timestamptz not null default now()
      )`
    checkHistory(migrations, await appliedIn(tx))
  })
  const done: string[] = []
  for (const migration of migrations) if (await apply(sql, migration, migrations)) done.push(migration.name)
  return done
}

async function readMigrations(folder: string): Promise<Migration[]> {
  const names = (await readdir(folder)).filter((name) => name.endsWith('.sql')).sort()
  for (const name of names) {
    const isTwin = names.some((other) => other !== name && other.slice(0, 3) === name.slice(0, 3))
    if (NAME.test(name) && !isTwin) continue
    const expected = isTwin ? 'has a number that another file has too' : 'must be named like 001-what.sql'
    throw new StoreError('migration-misnamed', `The migration ${name} ${expected}.`)
  }
  return Promise.all(
    names.map(async (name) => {
      // Line ends differ between check-outs; what was applied does not.
      const text = (await readFile(join(folder, name), 'utf8')).replaceAll('\r\n', '\n')
      return { name, text, checksum: createHash('sha256').update(text).digest('hex') }
    }),
  )
}

const appliedIn = (tx: TransactionSql): Promise<Applied[]> => tx<Applied[]>`
  select name, checksum from migrations order by name`

/** Every applied file is still there, unchanged, and no new one comes before the last applied. */
function checkHistory(migrations: Migration[], applied: Applied[]): void {
  for (const { name, checksum } of applied) {
    const migration = migrations.find((one) => one.name === name)
    if (migration === undefined) {
      throw new StoreError(
        'migration-unknown',
        `The database has the migration ${name}, which this version of Stagewatt does not know. Start the newer version.`,
      )
    }
    if (migration.checksum !== checksum) {
      throw new StoreError(
        'migration-changed',
        `The migration ${name} was changed after it had been applied. Put its text back and write a new file instead.`,
      )
    }
  }
  const last = applied.at(-1)?.name ?? ''
  const late = migrations.find(({ name }) => name < last && !applied.some((one) => one.name === name))
  if (late === undefined) return
  throw new StoreError(
    'migration-late',
    `The migration ${late.name} comes before ${last}, which is applied already. Give it a higher number.`,
  )
}

/** Applies one file unless it is applied; true when this call did it. */
function apply(sql: Sql, migration: Migration, all: Migration[]): Promise<boolean> {
  return inTurn(sql, async (tx) => {
    const applied = await appliedIn(tx)
    checkHistory(all, applied)
    if (applied.some(({ name }) => name === migration.name)) return false
    try {
      await tx.unsafe(migration.text)
    } catch (error) {
      throw storeFault(error) ?? failed(migration, error)
    }
    await tx`insert into migrations (name, checksum) values (${migration.name}, ${migration.checksum})`
    return true
  })
}

/** A transaction that only one process has at a time per schema; waiting for it has no limit. */
async function inTurn<T>(sql: Sql, work: (tx: TransactionSql) => Promise<T>): Promise<T> {
  const outcome = await sql.begin(async (tx) => {
    await tx`set local statement_timeout = 0`
    await tx`select pg_advisory_xact_lock(hashtext('stagewatt migrations'), hashtext(current_schema()))`
    return { value: await work(tx) }
  })
  return outcome.value
}

function failed(migration: Migration, error: unknown): StoreError {
  const position = typeof error === 'object' && error !== null && 'position' in error ? Number(error.position) : 0
  const line = position > 0 ? ` in line ${migration.text.slice(0, position).split('\n').length}` : ''
  return new StoreError('migration-failed', `The migration ${migration.name} failed${line}: ${errorMessage(error)}.`, {
    cause: error,
  })
}
