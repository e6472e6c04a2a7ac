import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { type NewReading, type ReadingStore, readingStore } from '../../server/store/reading-store.ts'
import { migrated, type TestDatabase } from './engines.ts'

const document = (more: Record<string, unknown> = {}) => ({
  id: randomUUID(),
  tracker: 'Left wing',
  at: '2026-10-10T11:20:00+10:30',
  inputV: 60.4,
  inputA: 3.27,
  outputV: 118.2,
  outputA: 1.62,
  meters: { inputV: 'Blue', inputA: 'Clamp 1' },
  ...more,
})

/** What readings promise, on any engine. */
export function readingSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let readings: ReadingStore

  beforeAll(async () => {
    database = await migrated(open())
    readings = readingStore(database.sql)
  })
  afterAll(() => database.discard())
  const given = (reading: NewReading['reading'], more: Partial<NewReading> = {}): NewReading => ({
    raceId: 'plateau-run',
    reading,
    carId: 'weaver-2',
    carVersion: 3,
    judgement: { verdict: 'counts', efficiencyPct: 97.1 },
    by: null,
    ...more,
  })

  it('a reading comes back as it was given, with its car, what was said of it, and its time', async () => {
    const reading = document({ note: 'clouds ☁ "thin"' })
    expect(await readings.add(given(reading))).toEqual({ stored: true })
    const found = await readings.get('plateau-run', reading.id)
    expect(found).toEqual({
      id: reading.id,
      reading,
      carId: 'weaver-2',
      carVersion: 3,
      judgement: { verdict: 'counts', efficiencyPct: 97.1 },
      receivedAt: found?.receivedAt,
      isSetAside: false,
    })
    expect(Math.abs(Date.parse(found?.receivedAt ?? '') - Date.now())).toBeLessThan(60_000)
    expect(await readings.get('other-race', reading.id)).toBeNull()
  })

  it('a reading sent again is kept once, also when the car was changed meanwhile', async () => {
    const reading = document()
    const raceId = 'repeat'
    await readings.add(given(reading, { raceId }))
    const turned = Object.fromEntries(Object.entries(reading).toReversed())
    expect(await readings.add(given({ ...turned, id: reading.id }, { raceId }))).toEqual({ repeat: true })
    const later = given(reading, { raceId, carVersion: 4, judgement: { verdict: 'far-off' } })
    expect(await readings.add(later)).toEqual({ repeat: true })
    expect(await readings.list(raceId)).toMatchObject([{ carVersion: 3, judgement: { verdict: 'counts' } }])
  })

  it('another reading under the same id is refused by the first field that differs', async () => {
    const reading = document()
    const raceId = 'conflict'
    await readings.add(given(reading, { raceId }))
    const cases: [more: Record<string, unknown>, field: string][] = [
      [{ outputA: 1.63 }, 'outputA'],
      [{ inputA: 3.28, outputA: 1.63 }, 'inputA'],
      [{ meters: { inputV: 'Blue', inputA: 'Clamp 2' } }, 'meters.inputA'],
      [{ meters: undefined }, 'meters'],
      [{ meters: { inputV: 'Blue', inputA: 'Clamp 1', outputA: 'Clamp 1' } }, 'meters.outputA'],
      [{ note: 'new' }, 'note'],
    ]
    for (const [more, field] of cases) {
      expect(await readings.add(given({ ...reading, ...more }, { raceId }))).toEqual({ conflict: field })
    }
    expect(await readings.list(raceId)).toMatchObject([{ reading }])
    expect(await readings.add(given(reading, { raceId: 'conflict-2' }))).toEqual({ stored: true })
  })

  it('of twenty sends of one reading at once one is stored and the others are repeats', async () => {
    const reading = document()
    const raceId = 'twenty'
    const outcomes = await Promise.all(Array.from({ length: 20 }, () => readings.add(given(reading, { raceId }))))
    expect(outcomes.filter((outcome) => 'stored' in outcome)).toHaveLength(1)
    expect(outcomes.filter((outcome) => 'repeat' in outcome)).toHaveLength(19)
    expect(await readings.list(raceId)).toHaveLength(1)
  })

  it('readings are listed in the order in which they were received', async () => {
    const raceId = 'in-order'
    const ids: string[] = []
    for (let n = 0; n < 12; n++) {
      const reading = document({ inputA: n })
      ids.push(reading.id)
      await readings.add(given(reading, { raceId }))
    }
    await readings.judge(raceId, ids[3], { verdict: 'far-off' })
    expect((await readings.list(raceId)).map(({ id }) => id)).toEqual(ids)
  })

  it('a reading set aside and taken back is the same reading; every mark stays on record', async () => {
    const raceId = 'marks'
    const reading = document()
    const other = document()
    await readings.add(given(reading, { raceId }))
    await readings.add(given(other, { raceId }))
    const asides = async (): Promise<boolean[]> => (await readings.list(raceId)).map(({ isSetAside }) => isSetAside)
    const by = randomUUID()
    expect(await readings.mark(raceId, reading.id, true, by)).toBe(true)
    expect(await asides()).toEqual([true, false])
    expect(await readings.mark(raceId, reading.id, false, null)).toBe(true)
    expect(await asides()).toEqual([false, false])
    expect(await readings.mark(raceId, reading.id, true, by)).toBe(true)
    expect(await readings.get(raceId, reading.id)).toMatchObject({ isSetAside: true, reading })
    const marks = await database.sql`select is_set_aside, created_by from reading_marks order by save_number`
    expect(marks.map((mark) => [mark.is_set_aside, mark.created_by])).toEqual([
      [true, by],
      [false, null],
      [true, by],
    ])
  })

  it('a new judgement holds and the earlier ones stay on record', async () => {
    const raceId = 'judged'
    const reading = document()
    await readings.add(given(reading, { raceId, judgement: { verdict: 'far-off' } }))
    expect(await readings.judge(raceId, reading.id, { verdict: 'counts', pairedWith: 'swap' })).toBe(true)
    expect(await readings.list(raceId)).toMatchObject([{ judgement: { verdict: 'counts', pairedWith: 'swap' } }])
    const rows = await database.sql`select judgement from reading_judgements where race_id = ${raceId} order by 1`
    expect(rows).toHaveLength(2)
  })

  it('a mark or judgement of no reading is not kept', async () => {
    const reading = document()
    await readings.add(given(reading))
    for (const id of ['', 'x', randomUUID(), 'nul\0']) {
      expect(await readings.mark('plateau-run', id, true, null)).toBe(false)
      expect(await readings.judge('plateau-run', id, {})).toBe(false)
      expect(await readings.get('plateau-run', id)).toBeNull()
      expect(await readings.mark(id, reading.id, true, null)).toBe(false)
      expect(await readings.list(id)).toEqual([])
    }
  })

  it('what cannot be kept is refused by the name of its field', async () => {
    const refused = (more: Partial<NewReading>): Promise<unknown> =>
      readings.add(given(document(), more)).catch((error: unknown) => error)
    expect(await refused({ reading: { id: 'one' } })).toMatchObject({ field: 'id' })
    expect(await refused({ reading: document({ note: 'a\0' }) })).toMatchObject({ field: 'reading.note' })
    expect(await refused({ carVersion: 0 })).toMatchObject({ field: 'carVersion' })
    expect(await refused({ raceId: 'No Slug' })).toMatchObject({ field: 'raceId' })
    for (const judgement of [undefined, null, 'far-off']) {
      expect(await refused({ judgement })).toMatchObject({ field: 'judgement' })
    }
    await expect(readings.judge('plateau-run', randomUUID(), null)).rejects.toMatchObject({ field: 'judgement' })
    expect(await refused({ by: 'me' })).toMatchObject({ field: 'by' })
  })
}
