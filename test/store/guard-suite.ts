import { setTimeout as pause } from 'node:timers/promises'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { Sql } from '../../server/store/database.ts'
import type { TestDatabase } from './engines.ts'

/** What the client promises about transactions, on any engine and with one connection too. */
export function guardSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let sql: Sql

  beforeAll(async () => {
    database = await open()
    sql = database.sql
    await sql`create table marks (n integer primary key)`
  })
  afterAll(() => database.discard())

  it('a statement on sql inside sql.begin is an immediate error, not a wait for ever', async () => {
    const attempts: ((tx: unknown) => PromiseLike<unknown>)[] = [
      () => sql`select 1`,
      () => sql.unsafe('select 1'),
      () => sql.begin((inner) => inner`select 1`),
      () => sql.notify('channel', 'text'),
      () => sql.reserve(),
      () => pause(5).then(() => sql`select 1`),
    ]
    for (const attempt of attempts) {
      const outcome = sql.begin(async (tx) => {
        await tx`insert into marks values (1)`
        await attempt(tx)
      })
      await expect(outcome).rejects.toMatchObject({
        code: 'sql-inside-transaction',
        message: expect.stringContaining('Use the transaction handed to the callback'),
      })
    }
    expect(await sql`select n from marks`).toEqual([])
  })

  it('pieces and values made by sql may be used in a transaction', async () => {
    const rows = await sql.begin(
      (tx) =>
        tx`select ${sql`1 + ${1}`} as n, ${sql.json({ a: 1 })} as body from ${sql('marks')} right join (values (1)) v on true`,
    )
    expect(rows).toEqual([{ n: 2, body: { a: 1 } }])
  })

  it('after the transaction, and beside it, sql works as ever', async () => {
    const beside = sql.begin(async (tx) => {
      await tx`insert into marks values (2)`
      await pause(20)
    })
    expect(await sql`select 1 as one`).toEqual([{ one: 1 }])
    await beside
    await sql.begin((tx) => tx`insert into marks values (3)`).then(() => sql`insert into marks values (4)`)
    expect(await sql`select n from marks where n in (2, 3, 4) order by n`).toEqual([{ n: 2 }, { n: 3 }, { n: 4 }])
  })

  it('a failed transaction is rolled back and gives its own error', async () => {
    const failed = sql.begin(async (tx) => {
      await tx`insert into marks values (10)`
      throw new Error('changed my mind')
    })
    await expect(failed).rejects.toThrow('changed my mind')
    const double = sql.begin(async (tx) => [tx`insert into marks values (11)`, tx`insert into marks values (11)`])
    await expect(double).rejects.toMatchObject({ code: '23505' })
    expect(await sql`select n from marks where n in (10, 11)`).toEqual([])
  })

  it('a savepoint may fail alone, and options and lists of statements work', async () => {
    const answer = await sql.begin('isolation level serializable', async (tx) => {
      await tx`insert into marks values (20)`
      await tx
        .savepoint('half', async (inner) => {
          await inner`insert into marks values (21)`
          throw new Error('only this')
        })
        .catch(() => null)
      await tx.savepoint((inner) => inner`insert into marks values (22)`)
      return 'done'
    })
    expect(answer).toBe('done')
    await sql.begin((tx) => [tx`insert into marks values (23)`, tx`insert into marks values (24)`])
    const rows = await sql`select n from marks where n between 20 and 29 order by n`
    expect(rows.map(({ n }) => Number(n))).toEqual([20, 22, 23, 24])
  })

  it('a transaction kept beyond its end says that it has ended', async () => {
    const kept = await sql.begin(async (tx) => ({ late: () => tx`select 1` }))
    await expect(kept.late()).rejects.toMatchObject({ code: 'transaction-ended' })
  })
}
