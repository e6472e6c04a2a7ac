import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { saving, type Service, startService } from './service.ts'

const DAY = '2026-10-17'
const CHOICE = `/api/v1/races/plateau/days/${DAY}/choice`
const documents = { carId: 'weaver-2', skyId: 'friday' }
const held = { ...documents, speeds: { kind: 'constant', speedKmh: 62 } }

let service: Service
beforeAll(async () => {
  service = await startService()
  await service.ask(saving('car', 'weaver-2'))
  await service.ask(saving('route', 'saltpan-twin-wells'))
  await service.ask(saving('sky', 'friday'))
  await service.ask(saving('race', 'plateau'))
})
afterAll(() => service.close())

const send = (method: 'PUT' | 'POST' | 'DELETE', url: string, body?: object, version?: number) =>
  service.ask({
    method,
    url,
    headers: {
      ...(body === undefined ? {} : { 'content-type': 'application/json' }),
      ...(version === undefined ? {} : { 'if-match': `"${version}"` }),
    },
    ...(body === undefined ? {} : { payload: JSON.stringify(body) }),
  })

describe('a day on which nothing was followed', () => {
  test('follows nothing again once its first choice is taken back', async () => {
    expect((await send('DELETE', CHOICE)).json().code).toBe('nothing-followed')
    expect((await send('PUT', CHOICE, held)).json()).toMatchObject({ ...held, until: null, version: 1 })
    expect((await send('DELETE', CHOICE)).json().code).toBe('precondition-required')
    expect((await send('DELETE', CHOICE, undefined, 4)).json().code).toBe('version-changed')
    expect((await send('DELETE', CHOICE, undefined, 1)).statusCode).toBe(204)
    for (const url of [CHOICE, CHOICE.replace('choice', 'budget'), CHOICE.replace('choice', 'pointing')])
      expect((await service.ask({ url })).json().code).toBe('nothing-followed')
    const { items } = (await service.ask({ url: '/api/v1/races/plateau/history' })).json()
    expect(items[0]).toMatchObject({ cause: 'choice', closingWhAfter: null })
    expect(items[0].closingWhBefore).toBe(items[1].closingWhAfter)
  })

  test('takes a choice as its first again, and versions count on', async () => {
    expect((await send('PUT', CHOICE, held, 1)).json().code).toBe('version-changed')
    expect((await send('PUT', CHOICE, held)).json()).toMatchObject({ version: 3 })
    expect((await send('PUT', CHOICE, held)).json().code).toBe('precondition-required')
  })
})

describe('a plan that ends at a camp on the road', { timeout: 60_000 }, () => {
  test('can be followed: budget, pointing and trackers end there too', async () => {
    const wanted = { ...documents, date: DAY, members: 50, byTime: '09:30' }
    const { id } = (await send('POST', '/api/v1/races/plateau/plans', wanted)).json()
    let plan = null
    while (plan === null) {
      plan = (await service.ask({ url: `/api/v1/plans/${id}` })).json().plan
      await new Promise((done) => setTimeout(done, 50))
    }
    expect(plan.outcome.kind).toBe('furthest')
    const { until, km } = plan.camp
    const { speeds, closingWh } = plan.forPeople
    const chosen = await send('PUT', CHOICE, { ...documents, speeds, until }, 3)
    expect(chosen.json()).toMatchObject({ until, version: 4 })
    const { budget, choice } = (await service.ask({ url: CHOICE.replace('choice', 'budget') })).json()
    expect(choice.until).toEqual(until)
    const [day] = budget.days
    expect(day.drivenKm).toBeCloseTo(km, 2)
    expect(Math.abs(day.closing.wh - closingWh)).toBeLessThan(1)
    const kept = (await service.ask({ url: `/api/v1/forecasts/${chosen.json().forecastId}` })).json()
    expect(kept).toMatchObject({ until, from: null })
    const { pointing } = (await service.ask({ url: CHOICE.replace('choice', 'pointing') })).json()
    expect(pointing.days[0].date).toBe(DAY)
    const back = await send('PUT', CHOICE, held, 4)
    expect(back.json()).toMatchObject({ ...held, until: null, version: 5 })
  })

  test('is refused where the camp is not on the day’s road', async () => {
    const until = { stage: 'saltpan-twin-wells', km: 5000 }
    const refused = await send('PUT', CHOICE, { ...held, until }, 5)
    expect(refused.statusCode).toBe(422)
    expect(refused.json().errors[0].field).toMatch(/^until\./)
  })
})

describe('a stored forecast', () => {
  const url = '/api/v1/races/plateau/forecasts'

  test('may begin where the car is and end at a camp, and is another one then', async () => {
    const whole = (await send('POST', url, { ...held, date: DAY })).json()
    const from = { at: `${DAY}T10:00:00+02:00`, stage: 'saltpan-old-pump', km: 20, chargePct: 60 }
    const rest = await send('POST', url, { ...held, date: DAY, from })
    expect(rest.statusCode).toBe(201)
    expect(rest.json()).toMatchObject({ from: { ...from, speedKmh: 0 }, until: null })
    expect(rest.json().id).not.toBe(whole.id)
    expect(rest.json().budget.days[0].opening.chargePct).toBe(60)
    expect((await send('POST', url, { ...held, date: DAY, from })).statusCode).toBe(200)
    const short = await send('POST', url, { ...held, date: DAY, until: { stage: 'saltpan-old-pump', km: 10 } })
    expect(short.json().budget.days[0].drivenKm).toBeCloseTo(10, 3)
  })
})
