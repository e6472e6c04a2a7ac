import { randomUUID } from 'node:crypto'
import { setTimeout as pause } from 'node:timers/promises'
import { afterAll, afterEach, beforeAll, beforeEach, expect, it } from 'vitest'
import { type Hub, openHub } from '../../server/live/hub.ts'
import { dayTopic } from '../../server/live/topics.ts'
import { type Database, openDatabase } from '../../server/store/database.ts'
import { migrate } from '../../server/store/migrate.ts'
import { notices } from '../../server/store/notices.ts'
import { store } from '../../server/store/store.ts'
import { MIGRATIONS, newSchema, WORKER } from '../store/engines.ts'
import { describeWithPostgres } from '../support/needs.ts'
import { farEnd, idsBetween, until } from './far-end.ts'

describeWithPostgres('two services on one server', () => {
  let schema: Awaited<ReturnType<typeof newSchema>>
  let databases: Database[]
  let one: Hub
  let two: Hub
  let topic: string

  beforeAll(async () => {
    schema = await newSchema()
    const open = (max: number): Promise<Database> =>
      openDatabase({ url: schema.url, dataDir: '', workerUrl: WORKER, max })
    databases = [await open(4), await open(1)]
    await migrate(databases[0].sql, MIGRATIONS)
  })
  afterAll(async () => {
    for (const database of databases) await database.close()
    await schema.drop()
  })
  beforeEach(async () => {
    const newHub = (database: Database): Promise<Hub> => {
      const { events, links } = store(database.sql)
      const isRevoked = async (id: string): Promise<boolean> => (await links.get(id))?.isRevoked ?? false
      return openHub({ events, notices: notices(database), isRevoked })
    }
    one = await newHub(databases[0])
    two = await newHub(databases[1])
    topic = dayTopic(`race-${randomUUID()}`, '2026-10-10')
  })
  afterEach(async () => {
    await one.close()
    await two.close()
  })

  /** Ends the connections on which the two hear of events, and no others. */
  const cutListeners = async (): Promise<number> => {
    const rows = await databases[0].sql`
      select pg_terminate_backend(pid) from pg_stat_activity
      where pid <> pg_backend_pid() and query = 'listen "stagewatt_' || hashtext(current_schema()) || '"'`
    return rows.length
  }

  it('what happens in one is told by the other within a second, however it is timed', async () => {
    const end = farEnd()
    await two.subscribe(topic, null, end).joined
    const delays: number[] = []
    for (let n = 1; n <= 20; n++) {
      await one.publish(topic, 'n', n)
      delays.push(await until(() => end.events.length === n))
    }
    expect(end.ids()).toEqual(idsBetween(1, 20))
    console.info(`from one process to the other: at most ${Math.max(...delays).toFixed(1)} ms`)
    expect(Math.max(...delays)).toBeLessThan(1000)
  })

  it('events poured in by both are told by both, each once and in order', async () => {
    const ends = [farEnd(), farEnd()]
    await one.subscribe(topic, null, ends[0]).joined
    await two.subscribe(topic, null, ends[1]).joined
    const both = [one, two]
    await Promise.all(Array.from({ length: 200 }, (_, n) => both[n % 2].publish(topic, 'n', n)))
    await until(() => ends.every(({ events }) => events.length >= 200))
    await pause(100)
    for (const end of ends) expect(end.ids()).toEqual(idsBetween(1, 200))
    const numbers = ends[0].events.map(({ data }) => data)
    expect(new Set(numbers)).toEqual(new Set(Array.from({ length: 200 }, (_, n) => n)))
    expect(ends[1].events.map(({ data }) => data)).toEqual(numbers)
  })

  it('a stream that moves from one to the other resumes where it was', async () => {
    const seen: string[] = []
    const move = async (): Promise<void> => {
      for (let turn = 0; seen.length < 100; turn++) {
        const end = farEnd()
        const subscription = [one, two][turn % 2].subscribe(topic, seen.at(-1) ?? '0', end)
        await pause(20)
        subscription.leave()
        seen.push(...end.ids())
        expect(end.events.map(({ kind }) => kind)).not.toContain('missed')
      }
    }
    const moving = move()
    for (let n = 0; n < 100; n++) await [one, two][n % 2].publish(topic, 'n', n)
    await moving
    expect(seen).toEqual(idsBetween(1, 100))
  })

  it('a service looks for events now and then, should it not hear that its connection was lost', async () => {
    let looks = 0
    const stop = await notices(databases[0], 20).hear(
      () => {},
      () => void looks++,
    )
    await until(() => looks >= 5)
    await stop()
    const count = looks
    await pause(100)
    expect(looks).toBe(count)
  })

  it('a revoked link’s streams end in both, and only its own', async () => {
    const link = randomUUID()
    const gone = [farEnd(link), farEnd(link)]
    const kept = [farEnd(randomUUID()), farEnd()]
    for (const [n, hub] of [one, two].entries()) {
      await hub.subscribe(topic, null, gone[n]).joined
      await hub.subscribe(topic, null, kept[n]).joined
    }
    await one.endStreamsOf(link)
    expect(gone[0].ends).toEqual(['revoked'])
    const tookMs = await until(() => gone[1].ends.length > 0)
    expect(tookMs).toBeLessThan(1000)
    expect(gone[1].ends).toEqual(['revoked'])
    await two.publish(topic, 'n', 1)
    await until(() => kept.every(({ events }) => events.length === 1))
    expect(gone.flatMap(({ events }) => events)).toEqual([])
    expect(kept.flatMap(({ ends }) => ends)).toEqual([])
  })

  it('after the connection to hear by was lost, nothing is missed and nothing repeated', {
    timeout: 60_000,
  }, async () => {
    const end = farEnd()
    await two.subscribe(topic, null, end).joined
    await one.publish(topic, 'n', 1)
    await until(() => end.events.length === 1)
    const link = randomUUID()
    const gone = farEnd(link)
    await two.subscribe(topic, null, gone).joined
    expect(await cutListeners()).toBe(2)
    for (let n = 2; n <= 10; n++) await one.publish(topic, 'n', n)
    await one.endStreamsOf(link)
    await until(() => end.events.length === 10 && gone.ends.length === 1, 10_000)
    expect(gone.ends).toEqual(['revoked'])
    // Heard again at once, not only by looking now and then.
    await pause(2_000)
    await one.publish(topic, 'n', 11)
    expect(await until(() => end.events.length === 11, 10_000)).toBeLessThan(1000)
    expect(end.ids()).toEqual(idsBetween(1, 11))
  })
})
