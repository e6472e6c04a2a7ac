import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { type NewPlan, type PlanStore, planStore } from '../../server/store/plan-store.ts'
import { migrated, type TestDatabase } from './engines.ts'

/** What kept plans promise, on any engine. */
export function planSuite(open: () => Promise<TestDatabase>): void {
  let database: TestDatabase
  let plans: PlanStore
  let racePlans: PlanStore

  beforeAll(async () => {
    database = await migrated(open())
    plans = planStore(database.sql, 'day')
    racePlans = planStore(database.sql, 'race')
  })
  afterAll(() => database.discard())
  const one = (raceId: string): NewPlan => ({
    id: randomUUID(),
    raceId,
    date: '2026-10-16',
    carId: 'weaver-2',
    skyId: 'friday',
    wanted: { nights: [{ date: '2026-10-16', kind: 'free' }] },
    inputsHash: 'a'.repeat(64),
    engineVersion: '1.0.0',
  })
  const startedAgo = (id: string, ago: string) =>
    database.sql`update plans set started_at = clock_timestamp() - ${ago}::interval where id = ${id}`

  it('of thirty who begin the same plan exactly one works on it', async () => {
    const plan = one('thirty')
    const began = await Promise.all(Array.from({ length: 30 }, () => racePlans.begin(plan)))
    expect(began.filter((is) => is)).toHaveLength(1)
    expect(await racePlans.get(plan.id)).toMatchObject({ ...plan, state: 'working', plan: null, gist: null })
  })

  it('a result is kept once, and not over a plan that was taken back', async () => {
    const [kept, back] = [one('results'), one('results')]
    for (const plan of [kept, back]) await racePlans.begin(plan)
    expect(await racePlans.cancel(back.id)).toBe(true)
    expect(await racePlans.finish(back.id, '{"days":[]}', {})).toBe(false)
    expect(await racePlans.finish(kept.id, '{"days":[1,2]}', { drivingMin: 996.4 })).toBe(true)
    expect(await racePlans.finish(kept.id, '{"days":[]}', {})).toBe(false)
    expect(await racePlans.cancel(kept.id)).toBe(false)
    expect(await racePlans.begin(kept)).toBe(false)
    const got = await racePlans.get(kept.id)
    expect([got?.state, got?.plan?.toJSON()]).toEqual(['done', { days: [1, 2] }])
    expect(await racePlans.entry(kept.id)).toEqual({ ...got, plan: undefined })
    expect(await plans.entry(kept.id)).toBeNull()
    expect((await racePlans.list('results')).map(({ id, gist }) => [id, gist])).toEqual([
      [back.id, null],
      [kept.id, { drivingMin: 996.4 }],
    ])
  })

  it('plans of a race and plans of a day do not see each other', async () => {
    const [day, race] = [one('kinds'), one('kinds')]
    await plans.begin(day)
    await racePlans.begin(race)
    expect((await plans.list('kinds')).map(({ id }) => id)).toEqual([day.id])
    expect((await racePlans.list('kinds')).map(({ id }) => id)).toEqual([race.id])
    expect(await plans.get(race.id)).toBeNull()
    expect(await plans.cancel(race.id)).toBe(false)
    expect(await plans.finish(race.id, '{}', {})).toBe(false)
    await plans.fail(race.id, { code: 'internal', detail: '' })
    expect(await racePlans.get(race.id)).toMatchObject({ state: 'working' })
  })

  it('one whose worker is long gone may be begun anew: a day’s after minutes, a race’s after half an hour', async () => {
    const [day, race] = [one('gone'), one('gone')]
    await plans.begin(day)
    await racePlans.begin(race)
    for (const { id } of [day, race]) await startedAgo(id, '10 minutes')
    expect(await plans.begin(day)).toBe(true)
    expect(await racePlans.begin(race)).toBe(false)
    await startedAgo(race.id, '31 minutes')
    expect(await racePlans.begin(race)).toBe(true)
  })

  it('one that failed says why, and may be begun again', async () => {
    const plan = one('failed')
    await racePlans.begin(plan)
    await racePlans.fail(plan.id, { code: 'cannot-forecast', detail: 'sky.places: too short' })
    const fault = { code: 'cannot-forecast', detail: 'sky.places: too short' }
    expect(await racePlans.get(plan.id)).toMatchObject({ state: 'failed', fault })
    expect(await racePlans.begin(plan)).toBe(true)
    expect(await racePlans.get(plan.id)).toMatchObject({ state: 'working', fault: null, endedAt: null })
  })

  it('an id that is none finds nothing', async () => {
    expect(await racePlans.get('plateau')).toBeNull()
    expect(await racePlans.cancel('plateau')).toBe(false)
  })
}
