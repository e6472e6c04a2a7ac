import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { carExample } from '../../server/api/examples/car.ts'
import { raceExample } from '../../server/api/examples/race.ts'
import { routeExample } from '../../server/api/examples/route.ts'
import { skyExample } from '../../server/api/examples/sky.ts'
import { ENGINE_VERSION } from '../../server/engine/version.ts'
import { ifVersion, saving, type Service, startService } from './service.ts'

const speeds = EXAMPLES.speeds.document

let service: Service
beforeAll(async () => {
  service = await startService()
  await service.ask(saving('car', 'weaver-2'))
  await service.ask(saving('route', 'saltpan-twin-wells'))
  await service.ask(saving('sky', 'friday'))
  await service.ask(saving('race', 'plateau'))
})
afterAll(() => service.close())

const post = (url: string, body: object) =>
  service.ask({ method: 'POST', url, headers: { 'content-type': 'application/json' }, payload: JSON.stringify(body) })

const forecast = (body: object, race = 'plateau') => post(`/api/v1/races/${race}/forecasts`, body)
const wanted = { carId: 'weaver-2', skyId: 'friday', speeds }

describe('a tracker report', () => {
  test('of whole or stored documents needs nothing saved and fits the forecast of the same body', async () => {
    const request = EXAMPLES['forecast-request'].document
    const report = (await post('/api/v1/tracker-report', request)).json()
    const budget = (await post('/api/v1/forecast', request)).json()
    expect(report.days.map((day: { date: string }) => day.date)).toEqual(['2026-10-17'])
    const [day] = report.days
    day.trackers.forEach(({ name, parts, ifDead }: (typeof report.days)[number]['trackers'][number], i: number) => {
      expect(name).toBe(budget.days[0].trackers[i].name)
      expect(parts[0].inputWh).toBeCloseTo(budget.days[0].trackers[i].inputWh, 6)
      expect(parts[0].onePointMin).toBeCloseTo(parts[0].onePointWh / day.price.whPerMin, 9)
      expect(ifDead.min).toBeCloseTo(ifDead.wh / day.price.whPerMin, 9)
    })
    const stored = { car: { id: 'weaver-2' }, race: { id: 'plateau' }, sky: { id: 'friday' }, speeds }
    const named = (await post('/api/v1/tracker-report', stored)).json()
    expect(named.days[0].trackers.length).toBeGreaterThan(0)
  })

  test('of documents that do not fit names what is wrong', async () => {
    const request = { ...EXAMPLES['forecast-request'].document, date: '2026-12-01' }
    const answer = await post('/api/v1/tracker-report', request)
    expect(answer.statusCode).toBe(422)
    expect(answer.json()).toMatchObject({ code: 'cannot-forecast', errors: [{ field: 'date' }] })
  })
})

describe('a forecast of stored documents', () => {
  test('tells what it was made from and what the day brings', async () => {
    const answer = await forecast(wanted)
    expect(answer.statusCode).toBe(201)
    const made = answer.json()
    expect(answer.headers.location).toBe(`/api/v1/forecasts/${made.id}`)
    expect(made).toMatchObject({
      raceId: 'plateau',
      raceVersion: 1,
      carId: 'weaver-2',
      carVersion: 1,
      skyId: 'friday',
      skyVersion: 1,
      routeVersions: { 'saltpan-twin-wells': 1 },
      speeds,
      engineVersion: ENGINE_VERSION,
    })
    expect(made.inputsHash).toMatch(/^[0-9a-f]{64}$/)
    const [day] = made.budget.days
    expect(day.outcome.kind).toBe('done')
    expect(day.ledger.openingWh + day.ledger.cameInWh - day.ledger.wentOutWh).toBeCloseTo(day.ledger.closingWh, 3)
  })

  test('is made once: the same inputs give the same forecast', async () => {
    const first = (await forecast(wanted)).json()
    const again = await forecast(wanted)
    expect(again.statusCode).toBe(200)
    expect(again.json()).toEqual(first)
    const other = await forecast({ ...wanted, speeds: { kind: 'constant', speedKmh: 55 } })
    expect(other.statusCode).toBe(201)
    expect(other.json().inputsHash).not.toBe(first.inputsHash)
  })

  test('asked for ten times at once is kept once', async () => {
    const body = { ...wanted, speeds: { kind: 'constant', speedKmh: 57 } }
    const answers = await Promise.all(Array.from({ length: 10 }, () => forecast(body)))
    expect(new Set(answers.map((answer) => answer.json().id)).size).toBe(1)
    const { items } = (await service.ask({ url: '/api/v1/races/plateau/forecasts' })).json()
    expect(items.filter((item: { speeds: object }) => JSON.stringify(item.speeds).includes('57'))).toHaveLength(1)
  })

  test('stays as it was when the car changes, and a new one is made', async () => {
    const before = (await forecast(wanted)).json()
    await service.ask(saving('car', 'changing'))
    const first = (await forecast({ ...wanted, carId: 'changing' })).json()
    const heavier = { ...carExample, body: { ...carExample.body, massKg: 280 } }
    await service.ask(ifVersion(saving('car', 'changing', heavier), 1))
    const second = await forecast({ ...wanted, carId: 'changing' })
    expect(second.statusCode).toBe(201)
    expect(second.json()).toMatchObject({ carVersion: 2 })
    expect(first.inputsHash).toBe(before.inputsHash)
    expect(second.json().inputsHash).not.toBe(first.inputsHash)
    const kept = await service.ask({ url: `/api/v1/forecasts/${first.id}` })
    expect(kept.json()).toEqual(first)
    expect(second.json().budget.days[0].closing.wh).toBeLessThan(first.budget.days[0].closing.wh)
  })

  test('never changes, so that a client may keep it', async () => {
    const { id } = (await forecast(wanted)).json()
    const answer = await service.ask({ url: `/api/v1/forecasts/${id}` })
    expect(answer.headers).toMatchObject({ etag: `"${id}"`, 'cache-control': expect.stringContaining('immutable') })
    const headers = { 'if-none-match': `"${id}"` }
    expect((await service.ask({ url: `/api/v1/forecasts/${id}`, headers })).statusCode).toBe(304)
  })

  test('stands in the list of its race without its budget', async () => {
    const { id } = (await forecast(wanted)).json()
    const { items } = (await service.ask({ url: '/api/v1/races/plateau/forecasts' })).json()
    expect(items.map((item: { id: string }) => item.id)).toContain(id)
    for (const item of items) expect(item).not.toHaveProperty('budget')
  })

  test.each([
    ['/api/v1/forecasts/01234567-89ab-8def-8123-456789abcdef', 404, 'no-such-forecast'],
    ['/api/v1/forecasts/weaver', 400, 'bad-id'],
    ['/api/v1/races/nowhere/forecasts', 404, 'no-such-document'],
  ])('%s is answered %i', async (url, status, code) => {
    expect((await service.ask({ url })).json()).toMatchObject({ status, code })
  })

  test.each([
    [{ ...wanted, carId: 'nobody' }, 422, 'missing-document', 'carId'],
    [{ ...wanted, skyId: 'nobody' }, 422, 'missing-document', 'skyId'],
    [{ ...wanted, speeds: { kind: 'constant', speedKmh: 900 } }, 422, 'invalid-document', 'speeds.speedKmh'],
    [{ ...wanted, driver: 'Nela' }, 422, 'invalid-document', 'driver'],
    [{ ...wanted, date: '2026-10-18' }, 422, 'cannot-forecast', 'date'],
  ])('%o is refused', async (body, status, code, field) => {
    expect((await forecast(body)).json()).toMatchObject({ status, code, errors: [{ field }] })
  })

  test('of a race on unknown roads names stage and route', async () => {
    const [day] = raceExample.days
    const lost = {
      ...raceExample,
      days: [{ ...day, stages: day.stages?.map((stage) => ({ ...stage, route: 'lost-road' })) }],
    }
    await service.ask(saving('race', 'lost', lost))
    const answer = await forecast(wanted, 'lost')
    expect(answer.json()).toMatchObject({
      status: 422,
      code: 'missing-route',
      errors: [
        { field: 'days[0].stages[0].route', value: '"lost-road"', detail: expect.stringContaining('saltpan-old-pump') },
        { field: 'days[0].stages[1].route' },
      ],
    })
  })
})

describe('a forecast of whole documents', () => {
  const whole = EXAMPLES['forecast-request'].document

  test('is the budget that stored documents give', async () => {
    const answer = await post('/api/v1/forecast', whole)
    expect(answer.statusCode).toBe(200)
    expect(answer.json()).toEqual((await forecast(wanted)).json().budget)
  })

  test.each([
    ['all from the store', { car: { id: 'weaver-2' }, race: { id: 'plateau' }, sky: { id: 'friday' }, speeds }],
    ['the sky from the store', { ...whole, sky: { id: 'friday' } }],
    ['the race from the store, its road given', { ...whole, race: { id: 'plateau' } }],
  ])('is the same with %s', async (_, body) => {
    expect((await post('/api/v1/forecast', body)).json()).toEqual((await post('/api/v1/forecast', whole)).json())
  })

  test('uses the road that is given before the one that is stored', async () => {
    const flat = { ...routeExample, points: { latDeg: routeExample.points.latDeg, lonDeg: routeExample.points.lonDeg } }
    const answer = await post('/api/v1/forecast', { ...whole, routes: { 'saltpan-twin-wells': flat } })
    expect(answer.json().assumptions.join()).toContain('no heights')
  })

  test('saves nothing', async () => {
    const before = await Promise.all(
      ['cars', 'routes', 'races', 'skies'].map((path) => service.ask({ url: `/api/v1/${path}` })),
    )
    const forecasts = (await service.ask({ url: '/api/v1/races/plateau/forecasts' })).body
    await post('/api/v1/forecast', { ...whole, speeds: { kind: 'constant', speedKmh: 44 } })
    const after = await Promise.all(
      ['cars', 'routes', 'races', 'skies'].map((path) => service.ask({ url: `/api/v1/${path}` })),
    )
    expect(after.map((answer) => answer.body)).toEqual(before.map((answer) => answer.body))
    expect((await service.ask({ url: '/api/v1/races/plateau/forecasts' })).body).toBe(forecasts)
  })

  test.each([
    ['a wrong field of the car', { ...whole, car: { ...carExample, name: '' } }, 'invalid-document', 'car.name'],
    [
      'a wrong stamp of the sky',
      { ...whole, sky: { ...skyExample, issuedAt: 'Friday' } },
      'invalid-document',
      'sky.issuedAt',
    ],
    ['a car that is not stored', { ...whole, car: { id: 'nobody' } }, 'missing-document', 'car.id'],
    ['a car id of another kind', { ...whole, car: { id: 7 } }, 'invalid-document', 'car.id'],
    ['no sky', { ...whole, sky: undefined }, 'invalid-document', 'sky'],
    ['an unknown date', { ...whole, date: '2030-01-01' }, 'cannot-forecast', 'date'],
    [
      'a road that is nowhere',
      {
        ...whole,
        race: {
          ...raceExample,
          days: [{ ...raceExample.days[0], stages: [{ ...raceExample.days[0].stages?.[0], route: 'lost' }] }],
        },
      },
      'missing-route',
      'days[0].stages[0].route',
    ],
  ])('with %s is refused', async (_, body, code, field) => {
    const problem = (await post('/api/v1/forecast', body)).json()
    expect(problem).toMatchObject({ status: 422, code })
    expect(problem.errors).toContainEqual(expect.objectContaining({ field }))
  })
})
