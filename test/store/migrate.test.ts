import { cpSync, mkdirSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { openDatabase } from '../../server/store/database.ts'
import { migrate } from '../../server/store/migrate.ts'
import { describeWithPostgres } from '../support/needs.ts'
import {
  embeddedDatabase,
  MIGRATIONS,
  newFolder,
  newSchema,
  serverDatabase,
  type TestDatabase,
  WORKER,
} from './engines.ts'

const OWN_FILES = [
  '001-documents.sql',
  '002-forecasts.sql',
  '003-access.sql',
  '004-readings.sql',
  '005-choices.sql',
  '006-beliefs.sql',
  '007-moves.sql',
  '008-events.sql',
  '009-plans.sql',
  '010-plan-gist.sql',
  '011-engine-moves.sql',
  '012-race-plans.sql',
  '013-plan-variants.sql',
  '014-followed-days.sql',
]

function migrateSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let folder: string
  const write = (name: string, text: string): void => writeFileSync(join(folder, name), text)
  const run = (): Promise<string[]> => migrate(database.sql, folder)
  const tables = async (): Promise<string[]> => {
    const rows = await database.sql<{ name: string }[]>`
      select table_name as name from information_schema.tables where table_schema = current_schema() order by 1`
    return rows.map(({ name }) => name)
  }

  beforeAll(async () => {
    database = await open()
  })
  afterAll(() => database.discard())
  beforeEach(() => {
    folder = newFolder()
    write('001-first.sql', 'create table first (n integer);\ninsert into first values (1);\n')
    write('002-second.sql', '-- A comment; with a semicolon.\ncreate table second (n integer);\n')
    write('notes.txt', 'no migration')
  })
  afterEach(async () => {
    rmSync(folder, { recursive: true, force: true })
    const names = (await tables()).map((name) => database.sql`drop table ${database.sql(name)} cascade`)
    for (const drop of names) await drop
  })

  it('each file is applied once, in order', async () => {
    expect(await run()).toEqual(['001-first.sql', '002-second.sql'])
    expect(await run()).toEqual([])
    write('003-third.sql', 'alter table first add column label text')
    expect(await run()).toEqual(['003-third.sql'])
    expect(await database.sql`select n, label from first`).toEqual([{ n: 1, label: null }])
  })

  it('a changed file is refused by its name; other line ends are no change', async () => {
    await run()
    write('001-first.sql', 'create table first (n integer);\r\ninsert into first values (1);\r\n')
    expect(await run()).toEqual([])
    write('001-first.sql', 'create table first (n bigint);\n')
    write('003-third.sql', 'create table third (n integer)')
    await expect(run()).rejects.toMatchObject({
      code: 'migration-changed',
      message: expect.stringContaining('001-first.sql'),
    })
    expect(await tables()).not.toContain('third')
  })

  it('a failing file leaves nothing of itself, and the error names file and line', async () => {
    write('002-second.sql', 'create table second (n integer);\n\ncreate table third (n nonsense);\n')
    await expect(run()).rejects.toMatchObject({
      code: 'migration-failed',
      message: 'The migration 002-second.sql failed in line 3: type "nonsense" does not exist.',
    })
    expect(await tables()).toEqual(['first', 'migrations'])
    write('002-second.sql', 'create table second (n integer)')
    expect(await run()).toEqual(['002-second.sql'])
  })

  it('a database from a newer version is refused, and so is a file that comes too late', async () => {
    await run()
    rmSync(join(folder, '002-second.sql'))
    await expect(run()).rejects.toMatchObject({
      code: 'migration-unknown',
      message: expect.stringContaining('002-second.sql'),
    })
    write('002-second.sql', '-- A comment; with a semicolon.\ncreate table second (n integer);\n')
    write('000-early.sql', 'select 1')
    await expect(run()).rejects.toMatchObject({ code: 'migration-late', message: expect.stringContaining('000-early') })
  })

  it('a file whose name has another form, or a number twice, is refused by its name', async () => {
    for (const name of ['third.sql', '3-third.sql', '003-Third.sql', '003.sql', '002-again.sql']) {
      write(name, 'select 1')
      await expect(run()).rejects.toMatchObject({ code: 'migration-misnamed', message: expect.stringContaining(name) })
      rmSync(join(folder, name))
    }
    expect(await run()).toHaveLength(2)
  })

  it('the service’s own files make its tables', async () => {
    expect(await migrate(database.sql, MIGRATIONS)).toEqual(OWN_FILES)
    expect(await tables()).toEqual([
      'access_links',
      'belief_uses',
      'budget_moves',
      'day_choices',
      'document_versions',
      'documents',
      'event_topics',
      'events',
      'forecasts',
      'migrations',
      'plan_variants',
      'plans',
      'reading_judgements',
      'reading_marks',
      'readings',
      'sessions',
    ])
  })
}

describe('migrations on the embedded engine', () => migrateSuite(() => embeddedDatabase()))
describeWithPostgres('migrations on a server', () => migrateSuite(() => serverDatabase()))

describeWithPostgres('several processes that migrate one server at once', () => {
  it('apply each file exactly once between them', async () => {
    const { url, drop } = await newSchema()
    const folder = newFolder()
    mkdirSync(join(folder, 'm'))
    cpSync(MIGRATIONS, join(folder, 'm'), { recursive: true })
    const slow = Array.from({ length: 7 }, (_, n) => `90${n}-slow.sql`)
    for (const [n, name] of slow.entries()) {
      writeFileSync(join(folder, 'm', name), `create table slow_${n} as select 1 as one from pg_sleep(0.02)`)
    }
    const databases = await Promise.all(
      Array.from({ length: 8 }, () => openDatabase({ url, dataDir: '', workerUrl: WORKER, max: 2 })),
    )
    const done = (await Promise.all(databases.map(({ sql }) => migrate(sql, join(folder, 'm'))))).flat()
    expect(done.sort()).toEqual([...OWN_FILES, ...slow])
    for (const database of databases) await database.close()
    rmSync(folder, { recursive: true, force: true })
    await drop()
  })
})
