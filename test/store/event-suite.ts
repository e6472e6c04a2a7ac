import { afterAll, beforeAll, expect, it } from 'vitest'
import { type EventStore, eventStore } from '../../server/store/event-store.ts'
import { migrated, type TestDatabase } from './engines.ts'

/** What kept events promise, on any engine. */
export function eventSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let events: EventStore

  beforeAll(async () => {
    database = await migrated(open())
    events = eventStore(database.sql)
  })
  afterAll(() => database.discard())

  it('each topic counts its own events from one', async () => {
    expect(await events.last('run/2026-10-10')).toBe('0')
    expect(await events.append('run/2026-10-10', 'reading', { id: 'a' })).toBe('1')
    expect(await events.append('run/2026-10-11', 'reading', { id: 'b' })).toBe('1')
    expect(await events.append('run/2026-10-10', 'budget', { closingWh: 2440.5 })).toBe('2')
    expect(await events.last('run/2026-10-10')).toBe('2')
    const all = await events.since('run/2026-10-10', '0', 100)
    expect(all.map(({ id, kind, data }) => [id, kind, data])).toEqual([
      ['1', 'reading', { id: 'a' }],
      ['2', 'budget', { closingWh: 2440.5 }],
    ])
    expect(all[0].at).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/)
  })

  it('after an id come exactly the later ones, in order and no more than asked for', async () => {
    for (let n = 1; n <= 12; n++) await events.append('run/many', 'n', n)
    const ids = async (lastId: string, limit: number): Promise<string[]> =>
      (await events.since('run/many', lastId, limit)).map(({ id }) => id)
    expect(await ids('8', 100)).toEqual(['9', '10', '11', '12'])
    expect(await ids('8', 2)).toEqual(['9', '10'])
    expect(await ids('12', 100)).toEqual([])
    for (const id of ['', 'x', '-1', '1.5', '9'.repeat(30), "0' or true --"]) expect(await ids(id, 100)).toEqual([])
  })

  it('two hundred events at once appear in order and without a hole to one who reads meanwhile', async () => {
    const seen: string[] = []
    const read = async (): Promise<void> => {
      do {
        const fresh = await events.since('run/rush', seen.at(-1) ?? '0', 50)
        seen.push(...fresh.map(({ id }) => id))
      } while (seen.length < 200)
    }
    const reading = read()
    await Promise.all(Array.from({ length: 200 }, (_, n) => events.append('run/rush', 'n', n)))
    await reading
    expect(seen).toEqual(Array.from({ length: 200 }, (_, n) => String(n + 1)))
  })

  it('pruned events are gone and their numbers are not used again', async () => {
    await events.append('run/old', 'n', 1)
    const [{ now }] = await database.sql<{ now: Date }[]>`select clock_timestamp() + interval '1 ms' as now`
    expect(await events.prune(new Date(now.getTime() - 3_600_000))).toBe(0)
    expect(await events.prune(new Date(now.getTime() + 1))).toBeGreaterThan(0)
    expect(await events.since('run/old', '0', 10)).toEqual([])
    expect(await events.last('run/old')).toBe('1')
    expect(await events.append('run/old', 'n', 2)).toBe('2')
  })

  it('what cannot be kept is refused by the name of its field', async () => {
    for (const topic of ['', 'a b', 'x'.repeat(101), 'nul\0']) {
      await expect(events.append(topic, 'n', 1)).rejects.toMatchObject({ field: 'topic' })
      expect(await events.since(topic, '0', 10)).toEqual([])
      expect(await events.last(topic)).toBe('0')
    }
    await expect(events.append('run/bad', 'n', { note: '\0' })).rejects.toMatchObject({ field: 'data.note' })
    await expect(events.append('run/bad', 'n', undefined)).rejects.toMatchObject({ field: 'data' })
    expect(await events.append('run/bad', 'n', 1)).toBe('1')
  })
}
