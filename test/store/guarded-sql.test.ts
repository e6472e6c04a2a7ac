import { createServer, connect, Socket } from 'node:net'
import { setTimeout as pause } from 'node:timers/promises'
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { type Database, openDatabase } from '../../server/store/database.ts'
import { storeFault } from '../../server/store/store-error.ts'
import { describeWithPostgres, testDatabaseUrl } from '../support/needs.ts'
import { embeddedDatabase, serverDatabase, WORKER } from './engines.ts'
import { guardSuite } from './guard-suite.ts'

describe('transactions on the embedded engine', () => guardSuite(() => embeddedDatabase()))
describeWithPostgres('transactions on a server', () => guardSuite(() => serverDatabase()))
describeWithPostgres('transactions on a server with one connection', () => guardSuite(() => serverDatabase({ max: 1 })))

describeWithPostgres('a server that is lost and comes back', () => {
  let links: Socket[] = []
  let database: Database
  let stopRelay: () => void

  const cut = (): void => {
    for (const link of links) link.destroy()
    links = []
  }

  /** A relay before the server whose links can be cut. */
  async function relay(): Promise<string> {
    const url = new URL(testDatabaseUrl() ?? '')
    const { port, hostname } = url
    const server = createServer((caller) => {
      const far = connect(Number(port || 5432), hostname)
      caller.pipe(far).pipe(caller)
      for (const link of [caller, far]) link.on('error', () => {})
      links.push(caller, far)
    })
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve))
    stopRelay = () => server.close()
    const address = server.address()
    url.hostname = '127.0.0.1'
    url.port = String(typeof address === 'object' ? address?.port : '')
    return url.href
  }

  beforeEach(async () => {
    database = await openDatabase({ url: await relay(), dataDir: '', workerUrl: WORKER, max: 1 })
  })
  afterEach(async () => {
    await database.close()
    stopRelay()
  })

  it('ends a running statement by an error and serves the next one', async () => {
    const { sql } = database
    for (let n = 0; n < 3; n++) {
      const lost = sql`select pg_sleep(5)`.catch((error: unknown) => error)
      await pause(50)
      cut()
      expect(storeFault(await lost)).toMatchObject({ code: 'database-stopped' })
      expect(await sql`select ${n}::int as n`).toEqual([{ n }])
    }
  })

  it('ends a transaction in the middle of a statement by an error, not the whole process', async () => {
    const { sql } = database
    const lost = sql.begin((tx) => tx`select pg_sleep(5)`).catch((error: unknown) => error)
    await pause(50)
    cut()
    expect(storeFault(await lost)).toMatchObject({ code: 'database-stopped' })
    expect(await sql`select 1 as one`).toEqual([{ one: 1 }])
  })

  it('ends a transaction between two statements by an error, whatever its work does afterwards', async () => {
    const { sql } = database
    for (const after of ['return', 'throw', 'ask'] as const) {
      const heard: unknown[] = []
      const lost = sql.begin(async (tx) => {
        await tx`select 1`
        await pause(100)
        if (after === 'throw') throw new Error('own error')
        if (after === 'ask') heard.push(await tx`select 2`.catch((error: unknown) => error))
      })
      await pause(50)
      cut()
      expect(storeFault(await lost.catch((error: unknown) => error))).toMatchObject({ code: 'database-stopped' })
      if (after === 'ask') await vi.waitFor(() => expect(heard[0]).toMatchObject({ code: 'transaction-ended' }))
      await pause(100)
      expect(await sql`select 1 as one`).toEqual([{ one: 1 }])
    }
  })

  it('is asked again even when it went in the moment of writing', async () => {
    const { sql } = database
    cut()
    await pause(50)
    const opened = vi.spyOn(Socket.prototype, 'connect')
    expect(await sql`select 1 as one`).toEqual([{ one: 1 }])
    const [socket] = opened.mock.contexts
    opened.mockRestore()
    if (socket instanceof Socket) socket.destroy()
    // The statement is taken just before the client hears of the loss, too late to be written.
    await new Promise((resolve) => setImmediate(resolve))
    const lost = sql`select 1`.catch((error: unknown) => error)
    expect(storeFault(await lost)).toMatchObject({ code: 'database-stopped' })
    expect(await sql`select 1 as one`).toEqual([{ one: 1 }])
  })
})

describeWithPostgres('limits on a server', () => {
  it('a statement and an idle transaction end after their limit', async () => {
    const database = await serverDatabase({ statementMs: 300, idleMs: 300 })
    const { sql } = database
    const long = await sql`select pg_sleep(5)`.catch((error: unknown) => error)
    expect(storeFault(long)).toMatchObject({ code: 'query-too-long' })
    const idle = await sql
      .begin(async (tx) => {
        await tx`select 1`
        await pause(900)
        await tx`select 2`
      })
      .catch((error: unknown) => error)
    expect(storeFault(idle)).not.toBeNull()
    const [{ TimeZone: zone }] = await sql`show timezone`
    expect(zone).toBe('UTC')
    await database.discard()
  })
})
