import { rmSync } from 'node:fs'
import type { Duplex } from 'node:stream'
import { setTimeout as pause } from 'node:timers/promises'
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest'
import { embeddedClient } from '../../server/store/database.ts'
import { type Embedded, openEmbedded } from '../../server/store/embedded.ts'
import { guardSql, type Sql } from '../../server/store/guarded-sql.ts'
import { storeFault } from '../../server/store/store-error.ts'
import { newFolder, warmFolder, WORKER } from './engines.ts'

const USUAL = { statementMs: 15_000, idleMs: 15_000 }
const SHORT = { statementMs: 1500, idleMs: 800 }

let folder: string
let engine: Embedded
let clients: Sql[] = []
const client = (): Sql => {
  const raw = embeddedClient(engine)
  clients.push(raw)
  return guardSql(raw)
}

async function start(limits: typeof USUAL): Promise<void> {
  folder = await warmFolder(newFolder())
  engine = await openEmbedded({ dataDir: folder, workerUrl: WORKER, limits })
  await client()`create table numbers (n integer primary key, label text)`
}
async function stop(): Promise<void> {
  await engine.stop()
  rmSync(folder, { recursive: true, force: true })
}
afterEach(async () => {
  await Promise.all(clients.map((sql) => sql.end({ timeout: 5 })))
  clients = []
})

describe('several clients on the one session', () => {
  beforeAll(() => start(USUAL))
  afterAll(stop)

  it('3,000 mixed queries at once each get their own rows', { timeout: 60_000 }, async () => {
    const three = [client(), client(), client()]
    const COUNT = 3000
    const ask = async (n: number): Promise<string> => {
      const sql = three[n % 3]
      switch (n % 6) {
        case 0:
          return String((await sql`select ${n}::int as n, pg_sleep(0)`)[0].n)
        case 1:
          return String((await sql.unsafe(`select ${n} as n`))[0].n)
        case 2:
          return String((await sql`select n from generate_series(1, ${n}::int) n`).at(-1)?.n)
        case 3:
          return sql.begin(async (tx) => {
            await tx`insert into numbers values (${n}, ${`row ${n}`})`
            await pause(n % 5)
            const [row] = await tx`select label from numbers where n = ${n}`
            return String(row.label).slice(4)
          })
        case 4:
          return String((await sql.unsafe(`select ${n} as n, ${'x'.length} as one`).simple())[0].n)
        default:
          return await sql`select ${n}::int / 0`.then(
            () => 'no error',
            (error: unknown) => (error instanceof Error && error.message === 'division by zero' ? String(n) : 'wrong'),
          )
      }
    }
    const answers = await Promise.all(Array.from({ length: COUNT }, (_, n) => ask(n)))
    expect(answers.filter((answer, n) => answer !== String(n))).toEqual([])
    expect(answers).toHaveLength(COUNT)
    const [{ count }] = await three[0]`select count(*)::int as count from numbers`
    expect(count).toBe(COUNT / 6)
  })

  it('a transaction of one is not seen by another before its commit', async () => {
    const [a, b] = [client(), client()]
    const order: string[] = []
    const look = async (): Promise<void> => {
      await pause(30)
      const [row] = await b`select label from numbers where n = 100001`
      order.push(String(row.label))
    }
    await Promise.all([
      a.begin(async (tx) => {
        await tx`insert into numbers values (100001, 'half')`
        order.push('inserted')
        await pause(100)
        await tx`update numbers set label = 'whole' where n = 100001`
        order.push('updated')
      }),
      look(),
    ])
    expect(order).toEqual(['inserted', 'updated', 'whole'])
  })

  it('a notice reaches who listens', async () => {
    const [a, b] = [client(), client()]
    const heard: string[] = []
    await a.listen('pace', (text) => heard.push(text))
    await b.notify('pace', '72 km/h')
    await vi.waitFor(() => expect(heard).toEqual(['72 km/h']))
  })

  it('a client that leaves in the middle of a transaction leaves nothing behind', async () => {
    const [a, b] = [client(), client()]
    const lost = a.begin(async (tx) => {
      await tx`insert into numbers values (100002, 'lost')`
      void a.end({ timeout: 0 })
      await pause(200)
    })
    await expect(lost).rejects.toMatchObject({ code: expect.stringMatching(/^CONNECTION_/) })
    expect(await b`select * from numbers where n = 100002`).toEqual([])
  })

  it('a connection that closes in the moment of writing is replaced', async () => {
    const sockets: Duplex[] = []
    const socket = async (): Promise<Duplex> => {
      sockets.push(await engine.socket())
      return sockets[sockets.length - 1]
    }
    const sql = embeddedClient({ ...engine, socket })
    clients.push(sql)
    for (let n = 0; n < 3; n++) {
      expect(await sql`select ${n}::int as n`).toEqual([{ n }])
      const lost = sql`select 1`.catch((error: unknown) => error)
      // The client has taken the statement by now and writes it in the event loop's next turn.
      for (let step = 0; step < 10; step++) await Promise.resolve()
      sockets[n].destroy()
      expect(await lost).toMatchObject({ code: 'CONNECTION_CLOSED' })
    }
    expect(await sql`select 2 as n`).toEqual([{ n: 2 }])
  })

  it('a commit forces its rows to the disk before it is acknowledged', async () => {
    const sql = client()
    await sql`select 1`
    for (let n = 0; n < 5; n++) {
      const before = engine.syncCount()
      await sql`insert into numbers values (${200_000 + n}, 'kept')`
      expect(engine.syncCount()).toBeGreaterThan(before)
    }
  })
  it('COPY FROM STDIN is refused in plain words, however it is sent, and the engine goes on', async () => {
    const sql = client()
    const refused = { code: '0A000', message: 'COPY FROM STDIN is not available on the embedded database' }
    for (let twice = 0; twice < 2; twice++) {
      await expect(sql`copy numbers from stdin`).rejects.toMatchObject(refused)
      await expect(sql`copy numbers /* rows */ from /**/ stdin`.writable()).rejects.toMatchObject(refused)
      await expect(sql.unsafe('copy numbers from stdin')).rejects.toMatchObject(refused)
      await expect(sql.unsafe('select 1; copy numbers from stdin; select 2')).rejects.toMatchObject(refused)
    }
    expect(await sql`select 'copy numbers from stdin' as text`).toEqual([{ text: 'copy numbers from stdin' }])
    expect(await sql`select ${'stdin'}::text as text`).toEqual([{ text: 'stdin' }])
    expect(await sql.unsafe("select 'from stdin' as text")).toEqual([{ text: 'from stdin' }])
  })
})

describe('what takes too long', () => {
  beforeAll(() => start(SHORT))
  afterAll(stop)

  it('a statement ends with the code a server gives, says so in one line, and the next request is served', async () => {
    const line = vi.spyOn(console, 'error').mockImplementation(() => {})
    const sql = client()
    await sql`insert into numbers values (300001, 'before')`
    const startMs = performance.now()
    const long = sql`select count(*) from generate_series(1, 100000000000)`.catch((error: unknown) => error)
    const error = await long
    const tookMs = performance.now() - startMs
    expect(error).toMatchObject({ code: '57014', message: 'the embedded database gave up a statement after 1.5 s' })
    expect(storeFault(error)).toMatchObject({ code: 'query-too-long' })
    expect(tookMs).toBeGreaterThan(SHORT.statementMs)
    expect(tookMs).toBeLessThan(SHORT.statementMs + 6000)
    expect(await sql`select label from numbers where n = 300001`).toEqual([{ label: 'before' }])
    expect(line.mock.calls).toEqual([
      ['Stagewatt: the embedded database gave up a statement after 1.5 s; it starts again with the next request.'],
    ])
    line.mockRestore()
  })

  it('a statement takes its transaction and all who waited with it, none of them hangs', async () => {
    const line = vi.spyOn(console, 'error').mockImplementation(() => {})
    const [a, b] = [client(), client()]
    await b`select 1`
    const outcomes = await Promise.allSettled([
      a.begin(async (tx) => {
        await tx`insert into numbers values (300002, 'rolled back')`
        await tx`select count(*) from generate_series(1, 100000000000)`
      }),
      ...Array.from({ length: 20 }, () => pause(100).then(() => a`select 1`)),
      ...Array.from({ length: 20 }, () => pause(100).then(() => b`select 1`)),
    ])
    expect(outcomes[0]).toMatchObject({ status: 'rejected', reason: { code: '57014' } })
    for (const sql of [a, b]) expect(await sql`select n from numbers where n = 300002`).toEqual([])
    expect(line).toHaveBeenCalledTimes(1)
    line.mockRestore()
  })

  it('a transaction that waits between two statements is rolled back, its work hears of it, and the next request is served', async () => {
    const sql = client()
    const heard: unknown[] = []
    const idle = sql.begin(async (tx) => {
      await tx`insert into numbers values (400001, 'idle')`
      await pause(SHORT.idleMs + 600)
      heard.push(await tx`select 1`.catch((error: unknown) => error))
    })
    await expect(idle).rejects.toMatchObject({ code: 'CONNECTION_CLOSED' })
    expect(storeFault(await idle.catch((error: unknown) => error))?.code).toBe('database-stopped')
    expect(await sql`select n from numbers where n = 400001`).toEqual([])
    await vi.waitFor(() => expect(heard).toHaveLength(1), 3000)
    expect(heard[0]).toMatchObject({ code: 'transaction-ended' })
    expect(await sql`select 1 as one`).toEqual([{ one: 1 }])
  })
})
