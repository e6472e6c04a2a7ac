import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { type ForecastStore, forecastStore, type NewForecast } from '../../server/store/forecast-store.ts'
import { migrated, type TestDatabase } from './engines.ts'

const forecast = (more: Partial<NewForecast> = {}): NewForecast => ({
  raceId: 'plateau-run',
  raceVersion: 3,
  carId: 'weaver-2',
  carVersion: 2,
  skyId: 'saturday',
  skyVersion: 7,
  routeVersions: { 'saltpan-twin-wells': 1, 'twin-wells-quiver-ridge': 4 },
  from: null,
  until: null,
  speeds: { kmh: 72 },
  inputsHash: 'a'.repeat(64),
  engineVersion: '0.1.0',
  budget: { ledger: [{ name: 'opening', wh: 4980.5 }], margin: null },
  ...more,
})

/** What forecasts promise, on any engine. */
export function forecastSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let forecasts: ForecastStore

  beforeAll(async () => {
    database = await migrated(open())
    forecasts = forecastStore(database.sql)
  })
  afterAll(() => database.discard())

  it('a saved forecast comes back with all that it was reckoned from', async () => {
    const given = forecast()
    const saved = await forecasts.save(given)
    expect(saved.createdAt).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/)
    expect(await forecasts.get(saved.id)).toEqual({ ...given, ...saved })
  })

  it('a repeat with its own id is saved once; the same id for other inputs is refused', async () => {
    const given = forecast({ id: randomUUID(), raceId: 'repeat' })
    const first = await forecasts.save(given)
    expect(first.id).toBe(given.id)
    expect(await forecasts.save(given)).toEqual(first)
    expect(await forecasts.list('repeat')).toHaveLength(1)
    await expect(forecasts.save({ ...given, inputsHash: 'other' })).rejects.toMatchObject({ code: 'forecast-id-taken' })
  })

  it('of twenty repeats at once one is saved and all are told the same', async () => {
    const given = forecast({ id: randomUUID(), raceId: 'twenty' })
    const outcomes = await Promise.all(Array.from({ length: 20 }, () => forecasts.save(given)))
    expect(new Set(outcomes.map(({ createdAt }) => createdAt)).size).toBe(1)
    expect(await forecasts.list('twenty')).toHaveLength(1)
  })

  it('the list shows the last fifty of a race, newest first, without budgets', async () => {
    const ids: string[] = []
    for (let n = 0; n < 55; n++) ids.unshift((await forecasts.save(forecast({ raceId: 'long-race', speeds: n }))).id)
    const list = await forecasts.list('long-race')
    expect(list.map(({ id }) => id)).toEqual(ids.slice(0, 50))
    expect(list[0]).not.toHaveProperty('budget')
    expect(list[0]).toMatchObject({ raceId: 'long-race', speeds: 54, routeVersions: { 'saltpan-twin-wells': 1 } })
    expect(await forecasts.list('no-such-race')).toEqual([])
  })

  it('the newest forecast of the same inputs and engine is found again, no other', async () => {
    await forecasts.save(forecast({ inputsHash: 'h1', budget: 'older' }))
    const newer = await forecasts.save(forecast({ inputsHash: 'h1', budget: 'newer' }))
    expect(await forecasts.findByInputs('h1', '0.1.0')).toMatchObject({ id: newer.id, budget: 'newer' })
    expect(await forecasts.findByInputs('h1', '0.2.0')).toBeNull()
    expect(await forecasts.findByInputs('h2', '0.1.0')).toBeNull()
  })

  it('an id that is none finds nothing, and cannot be saved', async () => {
    for (const id of ['', 'x', randomUUID(), `${randomUUID()}0`, "' or true --"]) {
      expect(await forecasts.get(id)).toBeNull()
    }
    await expect(forecasts.save(forecast({ id: 'x' }))).rejects.toMatchObject({
      code: 'field-not-storable',
      field: 'id',
    })
  })

  it('a version beyond what can be held and a NUL are refused by the name of their field', async () => {
    const refused = (more: Partial<NewForecast>): Promise<unknown> =>
      forecasts.save(forecast(more)).catch((error: unknown) => error)
    expect(await refused({ skyVersion: 2 ** 31 })).toMatchObject({ field: 'skyVersion' })
    expect(await refused({ raceVersion: 0.5 })).toMatchObject({ field: 'raceVersion' })
    expect(await refused({ budget: { sentence: 'a\0' } })).toMatchObject({ field: 'budget.sentence' })
    expect(await refused({ raceId: 'a\0' })).toMatchObject({ field: 'raceId' })
  })
}
