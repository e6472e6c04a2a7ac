import { randomUUID } from 'node:crypto'
import { setTimeout as pause } from 'node:timers/promises'
import { afterAll, afterEach, beforeAll, beforeEach, expect, it } from 'vitest'
import { type Hub, type HubParts, openHub } from '../../server/live/hub.ts'
import { dayTopic } from '../../server/live/topics.ts'
import { notices } from '../../server/store/notices.ts'
import { store } from '../../server/store/store.ts'
import { migrated, type TestDatabase } from '../store/engines.ts'
import { farEnd, idsBetween, until } from './far-end.ts'

/** What a process promises its own streams, on any engine. */
export function hubSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let hub: Hub
  let topic: string
  let hubs: Hub[] = []
  const newHub = async (more: Partial<HubParts> = {}): Promise<Hub> => {
    const { events, links } = store(database.sql)
    const isRevoked = async (id: string): Promise<boolean> => (await links.get(id))?.isRevoked ?? false
    const made = await openHub({ events, notices: notices(database), isRevoked, slowMs: 300, ...more })
    hubs.push(made)
    return made
  }

  beforeAll(async () => {
    database = await migrated(open())
  })
  afterAll(() => database.discard())
  beforeEach(async () => {
    hub = await newHub()
    topic = dayTopic(`race-${randomUUID()}`, '2026-10-10')
  })
  afterEach(async () => {
    for (const one of hubs) await one.close()
    hubs = []
  })
  const publish = async (from: number, to: number): Promise<void> => {
    for (let n = from; n <= to; n++) expect(await hub.publish(topic, 'n', { n })).toBe(String(n))
  }

  it('every listener of a day is told what happens on it, in order, and nothing of another day', async () => {
    const [one, two, other] = [farEnd(), farEnd(), farEnd()]
    for (const end of [one, two]) await hub.subscribe(topic, null, end).joined
    await hub.subscribe(dayTopic('another-race', '2026-10-10'), null, other).joined
    await publish(1, 5)
    await until(() => two.events.length === 5)
    expect(one.ids()).toEqual(idsBetween(1, 5))
    expect(two.events[4]).toMatchObject({ kind: 'n', data: { n: 5 }, at: expect.stringMatching(/Z$/) })
    expect(two.events[4]).toBe(one.events[4])
    expect(other.events).toEqual([])
    expect(hub.listenerCount()).toBe(3)
  })

  it('a stream that resumes after an event is told the later ones, none twice, and then goes on', async () => {
    await publish(1, 450)
    const ends = [0, 1, 249, 250, 449, 450].map((had) => ({ had, end: farEnd() }))
    for (const { had, end } of ends) void hub.subscribe(topic, String(had), end)
    await publish(451, 460)
    for (const { had, end } of ends) {
      await until(() => end.events.length >= 460 - had)
      expect(end.ids()).toEqual(idsBetween(had + 1, 460))
    }
  })

  it('streams that come and go while events pour in miss nothing and repeat nothing', async () => {
    const TOTAL = 120
    const restless = async (): Promise<string[]> => {
      const seen: string[] = []
      while (Number(seen.at(-1) ?? 0) < TOTAL) {
        const end = farEnd()
        const subscription = hub.subscribe(topic, seen.at(-1) ?? '0', end)
        await pause(Math.random() * 25)
        subscription.leave()
        seen.push(...end.ids())
        const count = end.events.length
        await pause(1)
        expect(end.events, 'nothing comes after leaving').toHaveLength(count)
      }
      return seen
    }
    const all = Promise.all(Array.from({ length: 8 }, restless))
    await Promise.all(Array.from({ length: TOTAL }, (_, n) => hub.publish(topic, 'n', n)))
    for (const seen of await all) expect(seen).toEqual(idsBetween(1, TOTAL))
  })

  it('who resumes from another process’s last event is not told that some were missed, nor anything twice', async () => {
    const deaf = await newHub({ notices: { hear: async () => async () => {} } })
    await deaf.subscribe(topic, null, farEnd()).joined
    await publish(1, 3)
    const end = farEnd()
    await deaf.subscribe(topic, '3', end).joined
    expect(end.events).toEqual([])
    await deaf.publish(topic, 'n', 4)
    await until(() => end.events.length > 0)
    expect(end.ids()).toEqual(['4'])
  })

  it('an event that the others are told while a stream begins is not lost to it', async () => {
    const { events } = store(database.sql)
    let hold: Promise<void> | null = null
    const last = async (name: string): Promise<string> => {
      const found = await events.last(name)
      await hold
      return found
    }
    const held = await newHub({ events: { ...events, last } })
    const [early, late] = [farEnd(), farEnd()]
    await held.subscribe(topic, null, early).joined
    let release = (): void => {}
    hold = new Promise((resolve) => {
      release = resolve
    })
    const { joined } = held.subscribe(topic, null, late)
    await pause(50)
    await held.publish(topic, 'n', 1)
    await until(() => early.events.length === 1)
    release()
    await joined
    await held.publish(topic, 'n', 2)
    await until(() => early.events.length === 2 && late.events.length > 0)
    expect(late.ids()).toEqual(['1', '2'])
  })

  it('without an id, or with one that is none, a stream begins with what comes next', async () => {
    await publish(1, 3)
    const ends = [null, '', 'x', '-1', '1.5', '9'.repeat(40)].map((lastId) => ({ lastId, end: farEnd() }))
    for (const { lastId, end } of ends) await hub.subscribe(topic, lastId, end).joined
    await publish(4, 4)
    for (const { end } of ends) {
      await until(() => end.events.length > 0)
      expect(end.ids()).toEqual(['4'])
    }
  })

  it('who resumes after events that are no longer kept, or never were, is told that some were missed', async () => {
    await publish(1, 3)
    await database.sql`delete from events where topic = ${topic}`
    await publish(4, 5)
    const kinds = async (lastId: string): Promise<string[]> => {
      const end = farEnd()
      await hub.subscribe(topic, lastId, end).joined
      return end.events.map(({ id, kind }) => `${id} ${kind}`)
    }
    expect(await kinds('1')).toEqual(['3 missed', '4 n', '5 n'])
    expect(await kinds('3')).toEqual(['4 n', '5 n'])
    expect(await kinds('5')).toEqual([])
    expect(await kinds('77')).toEqual(['5 missed'])
    await database.sql`delete from events where topic = ${topic}`
    expect(await kinds('3')).toEqual(['5 missed'])
    expect(await kinds('5')).toEqual([])
  })

  it('a listener that takes no more is not pressed, catches up when it does, and is told all once', async () => {
    const [slow, quick] = [farEnd(), farEnd()]
    const subscription = hub.subscribe(topic, null, slow)
    await subscription.joined
    await hub.subscribe(topic, null, quick).joined
    slow.isReady = false
    await publish(1, 20)
    await until(() => quick.events.length === 20)
    expect(slow.ids()).toEqual(['1'])
    slow.isReady = true
    subscription.drained()
    await publish(21, 23)
    await until(() => slow.events.length === 23 && quick.events.length === 23)
    expect(slow.ids()).toEqual(idsBetween(1, 23))
    await pause(400)
    expect(slow.ends, 'no longer slow').toEqual([])
  })

  it('a listener that stays slow is dropped, and the others get every event in time', async () => {
    const slow = Array.from({ length: 20 }, () => farEnd())
    const quick = Array.from({ length: 20 }, () => farEnd())
    for (const end of [...slow, ...quick]) await hub.subscribe(topic, null, end).joined
    for (const end of slow) end.isReady = false
    await publish(1, 10)
    await until(() => slow.every(({ ends }) => ends.length === 1))
    await publish(11, 12)
    await until(() => quick.every(({ events }) => events.length === 12))
    for (const { ends, events } of slow) expect([ends, events.length]).toEqual([['slow'], 1])
    for (const end of quick) expect([end.ends, end.ids()]).toEqual([[], idsBetween(1, 12)])
    expect(hub.listenerCount()).toBe(20)
  })

  it('a listener that throws is dropped without harm to the others', async () => {
    const broken = { ...farEnd(), ends: [] as string[] }
    const before = farEnd()
    const after = farEnd()
    await hub.subscribe(topic, null, before).joined
    const throws = (): never => {
      throw new Error('socket gone')
    }
    await hub.subscribe(topic, null, { ...broken, send: throws, end: throws }).joined
    await hub.subscribe(topic, null, after).joined
    await publish(1, 3)
    await until(() => after.events.length === 3)
    expect(before.ids()).toEqual(idsBetween(1, 3))
    expect(hub.listenerCount()).toBe(2)
  })

  it('the streams of a revoked link end, and no others', async () => {
    const link = randomUUID()
    const [gone, other, owner] = [farEnd(link), farEnd(randomUUID()), farEnd()]
    const elsewhere = farEnd(link)
    for (const end of [gone, other, owner]) await hub.subscribe(topic, null, end).joined
    await hub.subscribe(`${topic}-2`, null, elsewhere).joined
    await hub.endStreamsOf(link)
    expect([gone.ends, elsewhere.ends, other.ends, owner.ends]).toEqual([['revoked'], ['revoked'], [], []])
    await publish(1, 1)
    await until(() => other.events.length === 1 && owner.events.length === 1)
    expect(gone.events).toEqual([])
    await hub.endStreamsOf(link)
    expect(gone.ends).toEqual(['revoked'])
  })

  it('a stream that begins while its link is revoked ends too', async () => {
    const { links } = store(database.sql)
    const day = { raceId: 'plateau-run', date: '2026-10-10' }
    const hash = Array.from({ length: 64 }, () => Math.floor(Math.random() * 16).toString(16)).join('')
    const link = await links.createShare({ ...day, name: 'Scout', sha256: hash, by: null })
    const fine = farEnd(link.id)
    await hub.subscribe(topic, null, fine).joined
    expect(fine.ends).toEqual([])
    await links.revoke(link.id)
    const late = farEnd(link.id)
    await hub.subscribe(topic, null, late).joined
    expect(late.ends).toEqual(['revoked'])
    expect(hub.listenerCount()).toBe(1)
  })

  it('when events cannot be read, streams end so that they come back, and then resume', async () => {
    const { events } = store(database.sql)
    let isDown = false
    const flaky = await newHub({
      events: {
        ...events,
        since: (...parameters) => (isDown ? Promise.reject(new Error('down')) : events.since(...parameters)),
      },
    })
    const end = farEnd()
    await flaky.subscribe(topic, null, end).joined
    await flaky.publish(topic, 'n', 1)
    await until(() => end.events.length === 1)
    isDown = true
    await flaky.publish(topic, 'n', 2)
    await until(() => end.ends.length === 1)
    const early = farEnd()
    await flaky.subscribe(topic, '1', early).joined
    expect([end.ends, early.ends, flaky.listenerCount()]).toEqual([['failed'], ['failed'], 0])
    isDown = false
    const again = farEnd()
    await flaky.subscribe(topic, '1', again).joined
    await flaky.publish(topic, 'n', 3)
    await until(() => again.events.length === 2)
    expect(again.ids()).toEqual(['2', '3'])
  })

  it('a stop ends all streams, and what comes after ends at once', async () => {
    const end = farEnd()
    await hub.subscribe(topic, null, end).joined
    await hub.close()
    const late = farEnd()
    await hub.subscribe(topic, null, late).joined
    expect([end.ends, late.ends, hub.listenerCount()]).toEqual([['stopping'], ['stopping'], 0])
  })

  it('five hundred listeners are told within half a second', async () => {
    const ends = Array.from({ length: 500 }, () => farEnd())
    await Promise.all(ends.map((end) => hub.subscribe(topic, null, end).joined))
    const startedMs = performance.now()
    await hub.publish(topic, 'n', 1)
    await until(() => ends.every(({ events }) => events.length === 1))
    const tookMs = performance.now() - startedMs
    console.info(`500 listeners told in ${tookMs.toFixed(1)} ms`)
    expect(tookMs).toBeLessThan(500)
  })
}
