import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { type ChoiceStore, choiceStore } from '../../server/store/choice-store.ts'
import { migrated, type TestDatabase } from './engines.ts'
import { someForecast } from './some-forecast.ts'

/** What the crew's choices promise, on any engine. */
export function choiceSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let choices: ChoiceStore
  let forecastId: string

  beforeAll(async () => {
    database = await migrated(open())
    choices = choiceStore(database.sql)
    forecastId = await someForecast(database.sql)
  })
  afterAll(() => database.discard())
  const put = (raceId: string, expected: number | null, speeds: unknown, date = '2026-10-10') =>
    choices.put({ raceId, date }, expected, { carId: 'weaver-2', skyId: 'saturday', speeds, forecastId }, null)

  it('a day has no choice until one is made; then that one holds', async () => {
    expect(await choices.get('first', '2026-10-10')).toBeNull()
    const saved = await put('first', null, { kmh: 71.5 })
    const held = await choices.get('first', '2026-10-10')
    expect(saved).toEqual({ version: 1, savedAt: held?.savedAt })
    expect(held).toEqual({
      version: 1,
      savedAt: held?.savedAt,
      date: '2026-10-10',
      carId: 'weaver-2',
      skyId: 'saturday',
      speeds: { kmh: 71.5 },
      until: null,
      forecastId,
    })
    expect(await choices.get('first', '2026-10-11')).toBeNull()
  })

  it('a choice from an old version is refused with the one that holds', async () => {
    expect(await put('old', 1, { kmh: 70 })).toBe('missing')
    await put('old', null, { kmh: 70 })
    expect(await put('old', null, { kmh: 71 })).toEqual({ conflict: 1 })
    expect(await put('old', 1, { kmh: 72 })).toMatchObject({ version: 2 })
    expect(await put('old', 1, { kmh: 73 })).toEqual({ conflict: 2 })
    for (const version of [0, -1, 1.5, 3, 2 ** 31]) expect(await put('old', version, {})).toEqual({ conflict: 2 })
    expect(await choices.get('old', '2026-10-10')).toMatchObject({ speeds: { kmh: 72 }, version: 2 })
    const rows = await database.sql`select speeds from day_choices where race_id = 'old' order by version`
    expect(rows.map(({ speeds }) => speeds.kmh)).toEqual([70, 72])
  })

  it('of thirty choices from the same version exactly one wins', async () => {
    for (const expected of [null, 1, 2]) {
      const outcomes = await Promise.all(Array.from({ length: 30 }, (_, n) => put('thirty', expected, { n })))
      const won = outcomes.flatMap((outcome, n) => (typeof outcome === 'object' && 'version' in outcome ? [n] : []))
      expect(won).toHaveLength(1)
      expect(await choices.get('thirty', '2026-10-10')).toMatchObject({
        speeds: { n: won[0] },
        version: (expected ?? 0) + 1,
      })
    }
  })

  it('a race lists the choice that holds on each day, by date', async () => {
    await put('tour', null, { kmh: 68 }, '2026-10-12')
    await put('tour', null, { kmh: 70 }, '2026-10-11')
    await put('tour', 1, { kmh: 69 }, '2026-10-12')
    expect((await choices.list('tour')).map(({ date, speeds, version }) => [date, speeds, version])).toEqual([
      ['2026-10-11', { kmh: 70 }, 1],
      ['2026-10-12', { kmh: 69 }, 2],
    ])
    expect(await choices.list('no-race')).toEqual([])
  })

  it('a forecast made anew takes the place of the earlier one, unless another choice holds by now', async () => {
    await put('anew', null, { kmh: 70 })
    const anew = await someForecast(database.sql)
    expect(await choices.setForecast('anew', '2026-10-10', 1, anew)).toBe(true)
    expect(await choices.get('anew', '2026-10-10')).toMatchObject({ forecastId: anew, version: 1 })
    await put('anew', 1, { kmh: 71 })
    expect(await choices.setForecast('anew', '2026-10-10', 1, anew)).toBe(false)
    expect(await choices.get('anew', '2026-10-10')).toMatchObject({ forecastId, version: 2 })
    expect(await choices.setForecast('anew', '2026-10-11', 1, anew)).toBe(false)
  })

  it('a choice may end at a camp', async () => {
    const until = { stage: 'second', km: 31.5 }
    const choice = { carId: 'weaver-2', skyId: 'saturday', speeds: {}, until, forecastId }
    await choices.put({ raceId: 'camp', date: '2026-10-10' }, null, choice, null)
    expect(await choices.get('camp', '2026-10-10')).toMatchObject({ until })
    await put('camp', 1, {})
    expect(await choices.get('camp', '2026-10-10')).toMatchObject({ until: null, version: 2 })
  })

  it('one that is taken back leaves the day without a choice, and versions count on', async () => {
    const day = { raceId: 'back', date: '2026-10-10' }
    await put('back', null, { kmh: 70 })
    await put('back', null, { kmh: 71 }, '2026-10-11')
    expect(await choices.takeBack(day, 2, null)).toEqual({ conflict: 1 })
    const outcomes = await Promise.all(Array.from({ length: 10 }, () => choices.takeBack(day, 1, null)))
    expect(outcomes.filter((one) => typeof one === 'object' && 'version' in one)).toHaveLength(1)
    expect(outcomes.filter((one) => one === 'missing')).toHaveLength(9)
    expect(await choices.get('back', day.date)).toBeNull()
    expect((await choices.list('back')).map(({ date }) => date)).toEqual(['2026-10-11'])
    expect(await choices.takeBack(day, 2, null)).toBe('missing')
    expect(await choices.setForecast('back', day.date, 1, await someForecast(database.sql))).toBe(false)
    expect(await put('back', 1, { kmh: 72 })).toBe('missing')
    expect(await put('back', null, { kmh: 73 })).toMatchObject({ version: 3 })
    expect(await choices.get('back', day.date)).toMatchObject({ speeds: { kmh: 73 }, version: 3 })
    expect(await put('back', null, { kmh: 74 })).toEqual({ conflict: 3 })
  })

  it('one that is taken back is not made anew for another engine', async () => {
    await put('gone', null, { kmh: 70 })
    expect(await choices.outdated('another')).toContain('gone')
    await choices.takeBack({ raceId: 'gone', date: '2026-10-10' }, 1, null)
    expect(await choices.outdated('another')).not.toContain('gone')
  })

  it('what cannot be kept is refused by the name of its field', async () => {
    const refused = (day: Partial<{ raceId: string; date: string }>, more: object = {}): Promise<unknown> => {
      const choice = { carId: 'weaver-2', skyId: 'saturday', speeds: {}, forecastId, ...more }
      const put = choices.put({ raceId: 'bad', date: '2026-10-10', ...day }, null, choice, null)
      return put.catch((error: unknown) => error)
    }
    expect(await refused({ raceId: 'Bad' })).toMatchObject({ field: 'raceId' })
    for (const date of ['2026-13-01', '2026-02-30', '10.10.2026', '']) {
      expect(await refused({ date })).toMatchObject({ field: 'date' })
    }
    expect(await refused({}, { forecastId: 'x' })).toMatchObject({ field: 'forecastId' })
    expect(await refused({}, { speeds: { note: 'a\0' } })).toMatchObject({ field: 'speeds.note' })
    await expect(choices.setForecast('bad', '2026-10-10', 1, 'x')).rejects.toMatchObject({ field: 'forecastId' })
    expect(await choices.get('bad', '2026-10-10')).toBeNull()
    expect(await refused({}, { forecastId: randomUUID() })).toMatchObject({ field: 'forecastId' })
  })
}
