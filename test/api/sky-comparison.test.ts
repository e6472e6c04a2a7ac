import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { measuredExample, skyExample } from '../../server/api/examples/sky.ts'
import { saving, type Service, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
  for (const [kind, id] of [
    ['car', 'weaver-2'],
    ['race', 'plateau'],
    ['sky', 'friday'],
    ['route', 'saltpan-twin-wells'],
  ] as const)
    await service.ask(saving(kind, id))
})
afterAll(() => service.close())

const compare = (body: object) =>
  service.ask({
    method: 'POST',
    url: '/api/v1/sky-comparison',
    headers: { 'content-type': 'application/json' },
    payload: JSON.stringify(body),
  })

const speeds = EXAMPLES.speeds.document
const whole = { forecast: skyExample, measured: measuredExample }
const day = { car: { id: 'weaver-2' }, race: { id: 'plateau' }, speeds, date: '2026-10-17' }

describe('a comparison of two skies', () => {
  test('says how far the forecast was off at the measured place', async () => {
    const answer = await compare(whole)
    expect(answer.statusCode).toBe(200)
    const { places, worth, zone } = answer.json()
    expect(places).toMatchObject([{ name: 'Gate', rows: 9, nearest: { name: 'Saltpan' } }])
    expect([worth, zone]).toEqual([null, 'UTC+02:00'])
    // Nine stamps: forecast 15 18 21 24 27 29 31 32 32, less 0.03 °C for 5 m more height, measured 0.5 to 1 more.
    const air = places[0].scores.find((score: { id: string }) => score.id === 'airTempC')
    expect(air.rows).toBe(9)
    expect(air.bias).toBeCloseTo(-(0.5 + 0.5 + 1 + 1 + 1 + 1 + 0.5 + 0.5 + 1) / 9 - 0.0325, 3)
  })

  test('is the same with skies from the store', async () => {
    expect((await compare({ ...whole, forecast: { id: 'friday' } })).json()).toEqual((await compare(whole)).json())
  })

  test('says what the difference is worth on a day', async () => {
    const full = { ...whole, measured: { ...skyExample, source: 'measured', name: 'As forecast' }, day }
    const same = (await compare(full)).json()
    expect(same.zone).toBe('Africa/Windhoek')
    expect(same.worth).toMatchObject({ date: '2026-10-17', closingWh: 0 })
    const cloudy = { ...skyExample, places: [{ ...skyExample.places[0], cloudPct: Array(14).fill(90) }] }
    const worse = (await compare({ ...full, measured: cloudy })).json()
    expect(worse.worth.closingWh).toBeGreaterThan(0)
  })

  test('saves nothing', async () => {
    const before = (await service.ask({ url: '/api/v1/skies' })).body
    await compare({ ...whole, day: undefined })
    expect((await service.ask({ url: '/api/v1/skies' })).body).toBe(before)
  })

  const late = {
    ...measuredExample.places[0],
    at: measuredExample.places[0].at.map((at) => at.replace('10-17', '11-17')),
  }
  test.each([
    [
      'no common time',
      { ...whole, measured: { ...measuredExample, places: [late] } },
      'cannot-compare',
      'measured.places',
    ],
    ['a sky that is not stored', { ...whole, measured: { id: 'nobody' } }, 'missing-document', 'measured.id'],
    [
      'a car that is not stored',
      { ...whole, day: { ...day, car: { id: 'nobody' } } },
      'missing-document',
      'day.car.id',
    ],
    ['no measured sky', { forecast: skyExample }, 'invalid-document', 'measured'],
    ['a day without a date', { ...whole, day: { ...day, date: undefined } }, 'invalid-document', 'day.date'],
    ['a date off the race', { ...whole, day: { ...day, date: '2030-01-01' } }, 'cannot-compare', 'day.date'],
    ['a sky that ends before the day', { ...whole, day }, 'cannot-compare', 'measured.places'],
    ['a zone that is none', { ...whole, zone: 'Plateau' }, 'invalid-document', 'zone'],
    [
      'a stamp that is none',
      { ...whole, forecast: { ...skyExample, issuedAt: 'Friday' } },
      'invalid-document',
      'forecast.issuedAt',
    ],
  ])('with %s is refused, naming the field', async (_, body, code, field) => {
    const answer = await compare(body)
    expect(answer.json()).toMatchObject({ status: 422, code })
    expect(answer.json().errors).toContainEqual(expect.objectContaining({ field }))
  })
})
