import { randomBytes } from 'node:crypto'
import { cpSync, existsSync, mkdtempSync, readFileSync, renameSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import postgres from 'postgres'
import { type Database, openDatabase } from '../../server/store/database.ts'
import { migrate } from '../../server/store/migrate.ts'
import { testDatabaseUrl } from '../support/needs.ts'

/** The built worker: the code as shipped. */
export const WORKER = new URL('../../dist/server/store/embedded-worker.js', import.meta.url)
export const MIGRATIONS = fileURLToPath(new URL('../../migrations', import.meta.url))

/** A new folder that nothing else uses; the caller removes it. */
export const newFolder = (): string => mkdtempSync(join(tmpdir(), 'stagewatt-test-'))

const engineVersion = (): string => {
  const text = readFileSync(new URL('../../node_modules/@electric-sql/pglite/package.json', import.meta.url), 'utf8')
  return String(JSON.parse(text).version)
}

/** A new data folder that holds an empty database, copied from one that is made once per machine. */
export async function warmFolder(parent = newFolder()): Promise<string> {
  const template = join(tmpdir(), `stagewatt-test-empty-${engineVersion()}`)
  if (!existsSync(template)) {
    const own = newFolder()
    await (await openDatabase({ dataDir: own, workerUrl: WORKER })).close()
    try {
      renameSync(own, template)
    } catch {
      // Another test file was faster.
      rmSync(own, { recursive: true, force: true })
    }
  }
  cpSync(join(template, 'pg18'), join(parent, 'pg18'), { recursive: true })
  return parent
}

export interface TestDatabase extends Database {
  /** Closes it and removes what it left. */
  discard(): Promise<void>
}

type Limits = { statementMs?: number; idleMs?: number; max?: number }

/** The embedded engine on a folder of its own. */
export async function embeddedDatabase(limits: Limits = {}): Promise<TestDatabase> {
  const dataDir = await warmFolder()
  const database = await openDatabase({ dataDir, workerUrl: WORKER, ...limits })
  const discard = async (): Promise<void> => {
    await database.close()
    rmSync(dataDir, { recursive: true, force: true })
  }
  return { ...database, discard }
}

/** The test server's address with a schema of its own, and how to drop that. */
export async function newSchema(): Promise<{ url: string; schema: string; drop: () => Promise<void> }> {
  const url = new URL(testDatabaseUrl() ?? '')
  const schema = `test_${process.pid}_${randomBytes(6).toString('hex')}`
  const admin = postgres(url.href, { max: 1, onnotice: () => {} })
  await admin`create schema ${admin(schema)}`
  url.searchParams.set('search_path', schema)
  const drop = async (): Promise<void> => {
    await admin`drop schema ${admin(schema)} cascade`
    await admin.end()
  }
  return { url: url.href, schema, drop }
}

/** The test server with a schema of its own. */
export async function serverDatabase(limits: Limits = {}): Promise<TestDatabase> {
  const { url, drop } = await newSchema()
  const database = await openDatabase({ url, dataDir: '', workerUrl: WORKER, ...limits })
  const discard = async (): Promise<void> => {
    await database.close()
    await drop()
  }
  return { ...database, discard }
}

/** The same, with the service's tables. */
export async function migrated(open: Promise<TestDatabase>): Promise<TestDatabase> {
  const database = await open
  await migrate(database.sql, MIGRATIONS)
  return database
}
