import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { twoDayRace, twoDaySky } from '../../server/api/examples/two-days.ts'
import type { RacePlanDocument } from '../../server/documents/race-plan.ts'
import type { JOBS } from '../../server/compute/jobs.ts'
import { computePool } from '../../server/compute/pool.ts'
import { raceTopic } from '../../server/live/topics.ts'
import { builtFile, saving, type Service, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
  await service.ask(saving('car', 'weaver-2'))
  await service.ask(saving('route', 'saltpan-twin-wells'))
  await service.ask(saving('sky', 'weekend', twoDaySky))
  await service.ask(saving('race', 'weekend', twoDayRace))
})
afterAll(() => service.close())

const post = (url: string, body: object) =>
  service.ask({ method: 'POST', url, headers: { 'content-type': 'application/json' }, payload: JSON.stringify(body) })
const order = (body: object) => post('/api/v1/races/weekend/race-plans', body)
const at = async (url: string) => (await service.ask({ method: 'GET', url: `/api/v1${url}` })).json()
const wanted = { carId: 'weaver-2', skyId: 'weekend', members: 100 }

/** The plan once it is no longer worked on. */
async function settled(id: string) {
  for (;;) {
    const plan = await at(`/race-plans/${id}`)
    if (plan.state !== 'working') return plan
    await new Promise((done) => setTimeout(done, 50))
  }
}

describe('a race plan of stored documents', { timeout: 60_000 }, () => {
  test('is worked out in the background and kept; the same order is the same plan', async () => {
    const first = await order(wanted)
    expect(first.statusCode).toBe(202)
    const { id } = first.json()
    expect(first.headers.location).toBe(`/api/v1/race-plans/${id}`)
    const [meanwhile, made] = await Promise.all([order(wanted), settled(id)])
    expect(meanwhile.json().id).toBe(id)
    expect(made).toMatchObject({ id, state: 'done', fault: null, raceId: 'weekend', date: '2026-10-17' })
    const again = await order({ ...wanted, nights: [] })
    expect(again.statusCode).toBe(200)
    expect(again.json().plan).toEqual(made.plan)
    const plan: RacePlanDocument = made.plan
    expect(plan.outcome.kind).toBe('planned')
    expect(plan.days.map(({ close }) => close.kind)).toEqual(['found', 'race'])
    expect((await at('/races/weekend/race-plans')).items).toMatchObject([
      {
        id,
        gist: {
          outcome: 'planned',
          drivingMin: plan.drivingMin,
          closes: plan.days.map(({ date, close }) => ({
            date,
            kind: close.kind,
            chargePct: close.closing?.chargePct,
          })),
        },
      },
    ])
  })

  test('tells the race’s stream how far it is, from its turn to its end', async () => {
    const { id } = (await order(wanted)).json()
    const told = (await service.store.events.since(raceTopic('weekend'), '0', 100)).filter(
      ({ data }) => (data as { planId: string }).planId === id,
    )
    expect(told.every(({ kind }) => kind === 'race-plan')).toBe(true)
    const [states, shares] = ['state', 'share'].map((name) =>
      told.map(({ data }) => (data as Record<string, unknown>)[name]),
    )
    expect(states.slice(0, -1).every((state) => state === 'working')).toBe(true)
    expect(states[states.length - 1]).toBe('done')
    const rising = shares.slice(0, -1).map(Number)
    expect(rising.length).toBeGreaterThan(3)
    expect(rising).toEqual([...rising].sort((a, b) => a - b))
  })

  test('is not among the plans of a day, nor asked for as one', async () => {
    const { id } = (await order(wanted)).json()
    expect((await at('/races/weekend/plans')).items).toEqual([])
    expect((await at(`/plans/${id}`)).code).toBe('no-such-plan')
  })

  test('has speeds that a forecast of the first day finds to do what it says', async () => {
    const { plan } = await settled((await order(wanted)).json().id)
    const [{ date, road, close }]: RacePlanDocument['days'] = plan.days
    const { budget } = (
      await post('/api/v1/races/weekend/forecasts', { carId: 'weaver-2', skyId: 'weekend', speeds: road?.speeds, date })
    ).json()
    expect(Math.abs(budget.days[0].closing.wh - (close.closing?.wh ?? 0))).toBeLessThan(1)
    const arrival = budget.days[0].stages[1].arriveAt
    expect(Math.abs(Date.parse(arrival) - Date.parse(road?.arriveAt ?? ''))).toBeLessThanOrEqual(1000)
  })

  test('can be taken back while it is worked on, and ordered again', async () => {
    const { id } = (await order({ ...wanted, seed: 99 })).json()
    const answer = await service.ask({ method: 'DELETE', url: `/api/v1/race-plans/${id}` })
    expect(answer.json().state).toBe('cancelled')
    expect((await order({ ...wanted, seed: 99, toDate: '2026-10-17' })).json().id).not.toBe(id)
    expect((await order({ ...wanted, seed: 99 })).json().state).toBe('working')
    expect((await settled(id)).state).toBe('done')
  })

  test('refuses days that the race does not have, by their names', async () => {
    for (const more of [
      { fromDate: '2026-12-01' },
      { toDate: '2026-12-01' },
      { nights: [{ date: '2026-12-01', kind: 'free' }] },
    ])
      expect((await order({ ...wanted, ...more })).json().code).toBe('no-such-day')
  })

  test('refuses a night named twice and a charge over a full pack, by their fields', async () => {
    const twice = (await order({ ...wanted, nights: [1, 2].map(() => ({ date: '2026-10-17', kind: 'free' })) })).json()
    expect(twice.errors).toMatchObject([{ field: 'nights[1].date', detail: 'expected a day that is named once' }])
    const over = { date: '2026-10-17', kind: 'fixed', chargePct: 101 }
    expect((await order({ ...wanted, nights: [over] })).json().errors).toMatchObject([{ field: 'nights[0].chargePct' }])
  })

  test('that takes longer than its days may has failed, and says so', async () => {
    const compute = computePool<typeof JOBS>({ workerUrl: builtFile('compute/worker.js'), size: 1, timeLimitMs: 250 })
    const hurried: Service['compute'] = {
      ...service.compute,
      // Only the plan itself is hurried: what comes before it is no part of the claim.
      run: (kind, ...rest) => (kind === 'kept-race-plan' ? compute : service.compute).run(kind, ...rest),
    }
    const other = await service.another({ compute: hurried })
    const payload = JSON.stringify({ ...wanted, seed: 7 })
    const headers = { 'content-type': 'application/json' }
    const { id } = (
      await other.inject({ method: 'POST', url: '/api/v1/races/weekend/race-plans', headers, payload })
    ).json()
    const made = await settled(id)
    await compute.close()
    expect(made).toMatchObject({ state: 'failed', plan: null, gist: null })
    expect(made.fault).toEqual({ code: 'took-too-long', detail: 'The computation was stopped after 1 s.' })
  })
})

describe('a race plan of whole documents', () => {
  test('needs nothing saved', { timeout: 60_000 }, async () => {
    const answer = await post('/api/v1/race-plan', EXAMPLES['race-plan-request'].document)
    expect(answer.statusCode).toBe(200)
    expect(answer.json().outcome.kind).toBe('planned')
  })

  test('says which day the sky does not reach, and what would do', async () => {
    const document = EXAMPLES['race-plan-request'].document
    const answer = await post('/api/v1/race-plan', { ...document, sky: EXAMPLES.sky.document })
    expect(answer.json()).toMatchObject({ code: 'cannot-forecast', errors: [{ field: 'sky.places' }] })
    expect(answer.json().errors[0].detail).toContain('Sun 18 Oct')
    expect(answer.json().errors[0].detail).toContain('2026-10-17 as the last day to plan')
  })
})
