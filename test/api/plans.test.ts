import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { saving, type Service, startService } from './service.ts'

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
const order = (body: object) => post('/api/v1/races/plateau/plans', body)
const wanted = { carId: 'weaver-2', skyId: 'friday', date: '2026-10-17', members: 200 }

/** The plan once it is no longer worked on. */
async function settled(id: string) {
  for (;;) {
    const plan = (await service.ask({ method: 'GET', url: `/api/v1/plans/${id}` })).json()
    if (plan.state !== 'working') return plan
    await new Promise((done) => setTimeout(done, 50))
  }
}

/** The day of a forecast at speeds of a plan. */
async function forecastAt(speeds: unknown) {
  const body = { carId: 'weaver-2', skyId: 'friday', speeds, date: wanted.date }
  return (await post('/api/v1/races/plateau/forecasts', body)).json().budget.days[0]
}

/** Where two documents are apart by more than 1 s in a time, 1 Wh in an energy or in anything else. */
function apart(one: unknown, other: unknown, at = ''): string[] {
  if (typeof one === 'object' && one !== null && typeof other === 'object' && other !== null) {
    const keys = [...new Set([...Object.keys(one), ...Object.keys(other)])]
    return keys.flatMap((key) => apart(one[key as never], other[key as never], `${at}.${key}`))
  }
  const isTime = typeof one === 'string' && /^\d{4}-\d{2}-\d{2}T/.test(one)
  const off = isTime
    ? Math.abs(Date.parse(one) - Date.parse(String(other))) / 1000
    : Math.abs(Number(one) - Number(other))
  return one === other || off <= 1 ? [] : [`${at}: ${String(one)}, ${String(other)}`]
}

describe('a plan of stored documents', () => {
  test('is worked out in the background and kept; the same order is the same plan', async () => {
    const first = await order(wanted)
    expect(first.statusCode).toBe(202)
    const { id } = first.json()
    expect(first.headers.location).toBe(`/api/v1/plans/${id}`)
    const plan = await settled(id)
    expect(plan).toMatchObject({ id, state: 'done', fault: null, raceId: 'plateau', date: '2026-10-17' })
    const again = await order(wanted)
    expect(again.statusCode).toBe(200)
    expect(again.json().id).toBe(id)
    expect(again.json().plan).toEqual(plan.plan)
    const listed = (await service.ask({ method: 'GET', url: '/api/v1/races/plateau/plans' })).json()
    const entry = listed.items.find((one: { id: string }) => one.id === id)
    expect(entry.gist).toEqual({
      outcome: 'planned',
      targetPct: plan.plan.target.chargePct,
      arriveAt: plan.plan.forPeople.arriveAt,
      closingWh: plan.plan.forPeople.closingWh,
      closingPct: plan.plan.forPeople.closingPct,
      touchesReservePct: plan.plan.ranges.touchesReservePct,
    })
  })

  test('forecast anew at its speeds gives every balance within 1 Wh and every time within 1 s, reserve and target kept', async () => {
    const { id } = (await order(wanted)).json()
    const { plan } = await settled(id)
    for (const choice of [plan.best, plan.forPeople]) {
      const day = await forecastAt(choice.speeds)
      expect(Math.abs(day.closing.wh - choice.closingWh)).toBeLessThan(1)
      expect(Math.abs(day.marginWh - choice.leastSpareWh)).toBeLessThan(1)
      expect(day.marginWh).toBeGreaterThan(-0.01)
      expect(day.closing.wh).toBeGreaterThan(plan.target.wh - 0.01)
      const arrival = day.stages[day.stages.length - 1].arriveAt
      expect(Math.abs(Date.parse(arrival) - Date.parse(choice.arriveAt))).toBeLessThanOrEqual(1000)
    }
    const [planned, anew] = [plan.forPeople.budget, await forecastAt(plan.forPeople.speeds)]
    expect(apart(planned.gates, anew.gates)).toEqual([])
    expect(apart(planned.stages, anew.stages)).toEqual([])
    expect(planned.gates.length).toBeGreaterThan(4)
  })

  test('a steady plan is forecast to arrive when it says, with the reserve kept', async () => {
    const { plan } = await settled((await order(wanted)).json().id)
    const day = await forecastAt(plan.steady.speeds)
    const arrival = day.stages[day.stages.length - 1].arriveAt
    expect(Math.abs(Date.parse(arrival) - Date.parse(plan.steady.arriveAt))).toBeLessThanOrEqual(1000)
    expect(day.marginWh).toBeGreaterThan(0)
    expect(day.closing.wh).toBeGreaterThan(plan.target.wh - 5)
    expect(Date.parse(plan.steady.arriveAt)).toBeGreaterThanOrEqual(Date.parse(plan.best.arriveAt))
  })

  test('compares battery and range at one moment at every gate: on arrival where there is a stop', async () => {
    const { id } = (await order(wanted)).json()
    const { gates } = (await settled(id)).plan.ranges
    expect(gates.map(({ name }: { name: string }) => name)).toContain('Twin Wells')
    for (const { plannedWh, wh } of gates) {
      expect(wh.p10).toBeLessThan(plannedWh)
      expect(wh.p90).toBeGreaterThan(plannedWh)
    }
  })

  test('says in words what stands in the way of a target that cannot be met', async () => {
    const { id } = (await order({ ...wanted, targetPct: 100 })).json()
    const { plan } = await settled(id)
    expect(plan.outcome.kind).toBe('impossible')
    expect(plan.outcome.text).toMatch(/at most|just short/)
    const target = plan.impossible.nearest.find((one: { what: string }) => one.what === 'target')
    expect(target.value).toBeLessThanOrEqual(99)
    const { id: nearer } = (await order({ ...wanted, targetPct: Math.floor(target.value) })).json()
    expect((await settled(nearer)).plan.outcome.kind).toBe('planned')
  })

  test('can be taken back while it is worked on, and ordered again', async () => {
    const { id } = (await order({ ...wanted, seed: 99 })).json()
    const answer = await service.ask({ method: 'DELETE', url: `/api/v1/plans/${id}` })
    expect(answer.statusCode).toBe(200)
    expect(answer.json().state).toBe('cancelled')
    expect((await order({ ...wanted, seed: 99 })).json().state).toBe('working')
    expect((await settled(id)).state).toBe('done')
  })

  test('can begin where the car is, and ends where its hours let it come', async () => {
    const from = { at: '2026-10-17T10:00:00+02:00', stage: 'saltpan-old-pump', km: 20, chargePct: 60, speedKmh: 70 }
    const anew = await settled((await order({ ...wanted, members: 50, from })).json().id)
    expect(anew).toMatchObject({ state: 'done', wanted: { from } })
    expect(anew.plan.outcome.kind).toBe('planned')
    expect(anew.plan.forPeople.budget.opening.chargePct).toBe(60)
    const short = await settled((await order({ ...wanted, members: 50, from, byTime: '10:20' })).json().id)
    expect(short.plan.outcome.kind).toBe('furthest')
    expect(short.plan.camp.leftKm).toBeGreaterThan(0)
  })

  test('refuses an instant that is not on its day, by its field', async () => {
    const from = { at: '2026-10-18T10:00:00+02:00', stage: 'saltpan-old-pump', km: 20, chargePct: 60 }
    const failed = await settled((await order({ ...wanted, from })).json().id)
    expect(failed).toMatchObject({ state: 'failed', fault: { code: 'cannot-forecast' } })
    expect(failed.fault.detail).toMatch(/^from\.at: /)
  })

  test('refuses a day that the race does not have', async () => {
    expect((await order({ ...wanted, date: '2026-12-01' })).json().code).toBe('no-such-day')
  })
})

describe('a plan of whole documents', () => {
  test('needs nothing saved', async () => {
    const { speeds: _speeds, ...request } = EXAMPLES['forecast-request'].document as { speeds: unknown }
    const answer = await post('/api/v1/plan', { ...request, date: '2026-10-17', members: 100 })
    expect(answer.statusCode).toBe(200)
    expect(answer.json().outcome.kind).toBe('planned')
  })
})
