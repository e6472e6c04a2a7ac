import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { carExample } from '../../server/api/examples/car.ts'
import { ENGINE_VERSION } from '../../server/engine/version.ts'
import { saving, type Service, startService } from './service.ts'

const DAY = '2026-10-17'
const ADDRESS = `/api/v1/races/plateau/days/${DAY}/pointing`
const request = EXAMPLES['forecast-request'].document
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

const send = (method: 'POST' | 'PUT', url: string, body: object) =>
  service.ask({ method, url, headers: { 'content-type': 'application/json' }, payload: JSON.stringify(body) })
const follow = () =>
  send('PUT', `/api/v1/races/plateau/days/${DAY}/choice`, { carId: 'weaver-2', skyId: 'friday', speeds })

describe('where to point the array', () => {
  test('is told for whole or stored documents, and nothing is saved', async () => {
    const answer = await send('POST', '/api/v1/pointing', request)
    expect(answer.statusCode).toBe(200)
    const pointing = answer.json()
    expect(pointing).toMatchObject({ engineVersion: ENGINE_VERSION, car: carExample.name })
    const [day] = pointing.days
    expect(day.date).toBe(DAY)
    expect(day.windows.map(({ kind }: { kind: string }) => kind)).toContain('stop')
    for (const { holds, arrayUp, arrayDown } of day.windows) {
      expect(arrayUp).toMatch(/\+02:00$/)
      expect(holds[0].from).toBe(arrayUp)
      expect(holds.at(-1).to).toBe(arrayDown)
    }
    const stored = { car: { id: 'weaver-2' }, race: { id: 'plateau' }, sky: { id: 'friday' }, speeds }
    expect((await send('POST', '/api/v1/pointing', stored)).json().days).toEqual(pointing.days)
    expect((await service.ask({ url: '/api/v1/races/plateau/forecasts' })).json().items).toEqual([])
  })

  test('adds up to the budget of the same body', async () => {
    const [budgetDay] = (await send('POST', '/api/v1/forecast', request)).json().days
    const [day] = (await send('POST', '/api/v1/pointing', request)).json().days
    const { fromMs, toMs, inW } = budgetDay.series
    for (const { arrayUp, arrayDown, total } of day.windows) {
      const [from, to] = [Date.parse(arrayUp), Date.parse(arrayDown)]
      let wh = 0
      inW.forEach((watts: number, i: number) => {
        const middle = (fromMs[i] + (fromMs[i + 1] ?? toMs)) / 2
        if (middle > from && middle < to) wh += (watts * ((fromMs[i + 1] ?? toMs) - fromMs[i])) / 3_600_000
      })
      expect(total.best.harvestWh).toBeCloseTo(wh, 1)
    }
  })

  test('of a day that is not followed says so, and then follows the choice', async () => {
    const before = await service.ask({ url: ADDRESS })
    expect(before.statusCode).toBe(404)
    expect(before.json().code).toBe('nothing-followed')
    const { forecastId } = (await follow()).json()
    const answer = await service.ask({ url: ADDRESS })
    expect(answer.statusCode).toBe(200)
    expect(answer.headers['cache-control']).toBe('no-cache')
    expect(answer.json().forecastId).toBe(forecastId)
    const { days } = (await send('POST', '/api/v1/pointing', { ...request, date: DAY })).json()
    expect(answer.json().pointing.days).toEqual(days)
  })

  test('stays with the versions that are followed when a document changes', async () => {
    const before = (await service.ask({ url: ADDRESS })).json()
    const { stand: _stand, ...bare } = carExample
    const { etag } = (await service.ask({ url: '/api/v1/cars/weaver-2' })).headers
    const put = saving('car', 'weaver-2', bare)
    const saved = await service.ask({ ...put, headers: { ...put.headers, 'if-match': String(etag) } })
    expect(saved.statusCode).toBe(200)
    expect((await service.ask({ url: ADDRESS })).json()).toEqual(before)
    const named = { car: { id: 'weaver-2' }, race: { id: 'plateau' }, sky: { id: 'friday' }, speeds }
    const [day] = (await send('POST', '/api/v1/pointing', named)).json().days
    expect(day).toMatchObject({ windows: [], noWindow: 'no-stand' })
  })

  test.each([
    ['/api/v1/races/nowhere/days/2026-10-17/pointing', 404, 'no-such-document'],
    ['/api/v1/races/plateau/days/2026-10-19/pointing', 404, 'no-such-day'],
    ['/api/v1/races/plateau/days/saturday/pointing', 400, 'bad-id'],
    [`${ADDRESS}?minutes=5`, 400, 'bad-query'],
  ])('%s is answered %i', async (url, status, code) => {
    expect((await service.ask({ url })).json()).toMatchObject({ status, code })
  })

  test('of documents that do not fit names what is wrong', async () => {
    const answer = await send('POST', '/api/v1/pointing', { ...request, date: '2026-12-01' })
    expect(answer.statusCode).toBe(422)
    expect(answer.json()).toMatchObject({ code: 'cannot-forecast', errors: [{ field: 'date' }] })
    const stand = { ...carExample.stand, reaimEveryMin: -1 }
    const wrong = await send('POST', '/api/v1/pointing', { ...request, car: { ...carExample, stand } })
    expect(wrong.json()).toMatchObject({
      code: 'invalid-document',
      errors: [{ field: 'car.stand.reaimEveryMin', value: '-1' }],
    })
  })
})
