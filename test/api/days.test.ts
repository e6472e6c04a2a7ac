import { afterAll, beforeAll, expect, test } from 'vitest'
import { raceExample } from '../../server/api/examples/race.ts'
import { saving, type Service, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
  const [saturday] = raceExample.days
  const sunday = { ...saturday, date: '2026-10-18', zone: 'UTC', stages: [] }
  await service.ask(saving('race', 'plateau', { ...raceExample, days: [saturday, sunday] }))
})
afterAll(() => service.close())

test('the days of a race come with zone, driving hours and stages', async () => {
  const { items } = (await service.ask({ url: '/api/v1/races/plateau/days' })).json()
  expect(items).toMatchObject([
    {
      date: '2026-10-17',
      zone: 'Africa/Windhoek',
      driving: { from: '08:00', to: '17:00' },
      stages: [
        {
          id: 'saltpan-old-pump',
          start: 'Saltpan',
          finish: 'Old Pump',
          route: 'saltpan-twin-wells',
          fromKm: 0,
          toKm: 52,
        },
        { id: 'old-pump-twin-wells', fromKm: 52 },
      ],
    },
    { date: '2026-10-18', zone: 'UTC', stages: [] },
  ])
  expect(items[0].stages[1]).not.toHaveProperty('toKm')
})

test('one day and its stages have addresses of their own', async () => {
  const { items } = (await service.ask({ url: '/api/v1/races/plateau/days' })).json()
  expect((await service.ask({ url: '/api/v1/races/plateau/days/2026-10-17' })).json()).toEqual(items[0])
  const stages = await service.ask({ url: '/api/v1/races/plateau/days/2026-10-17/stages' })
  expect(stages.json()).toEqual({ items: items[0].stages })
})

test.each([
  ['/api/v1/races/nowhere/days', 404, 'no-such-document'],
  ['/api/v1/races/plateau/days/2026-10-19', 404, 'no-such-day'],
  ['/api/v1/races/plateau/days/2026-10-19/stages', 404, 'no-such-day'],
  ['/api/v1/races/plateau/days/saturday', 400, 'bad-id'],
  ['/api/v1/races/plateau/days/2026-02-30', 400, 'bad-id'],
])('%s is answered %i', async (url, status, code) => {
  expect((await service.ask({ url })).json()).toMatchObject({ status, code })
})
