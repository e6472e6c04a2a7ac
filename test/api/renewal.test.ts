import { afterAll, beforeAll, expect, test } from 'vitest'
import { renewOutdated } from '../../server/api/followed.ts'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { ENGINE_VERSION } from '../../server/engine/version.ts'
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

const DAY = '/api/v1/races/plateau/days/2026-10-17'
const get = async (url: string) => (await service.ask({ method: 'GET', url })).json()

test('a budget that an earlier engine made is made anew, and the history says so', async () => {
  const payload = JSON.stringify({ carId: 'weaver-2', skyId: 'friday', speeds: EXAMPLES.speeds.document })
  const headers = { 'content-type': 'application/json' }
  expect((await service.ask({ method: 'PUT', url: `${DAY}/choice`, headers, payload })).statusCode).toBe(200)
  const { forecastId, budget } = await get(`${DAY}/budget`)
  const { sql } = service.database
  // What is kept by an earlier engine lacks what this one tells, and has an id of its own.
  const oldId = '00000000-0000-8000-8000-000000000001'
  await sql`insert into forecasts (id, race_id, race_version, car_id, car_version, sky_id, sky_version, route_versions,
      speeds, inputs_hash, engine_version, budget)
    select ${oldId}::uuid, race_id, race_version, car_id, car_version, sky_id, sky_version, route_versions,
      speeds, inputs_hash, '0.0.1', '{"days": []}'::jsonb
    from forecasts where id = ${forecastId}`
  await sql`update day_choices set forecast_id = ${oldId}::uuid`
  expect(await service.store.choices.outdated(ENGINE_VERSION)).toEqual(['plateau'])
  const { store, compute, live } = service
  await renewOutdated({ store, compute, live, version: '0.0.0-test' })
  const renewed = await get(`${DAY}/budget`)
  expect(renewed.forecastId).toBe(forecastId)
  expect(renewed.budget).toEqual(budget)
  expect(await service.store.choices.outdated(ENGINE_VERSION)).toEqual([])
  const { items } = await get('/api/v1/races/plateau/history')
  expect(items[0]).toMatchObject({ cause: 'engine', closingWhBefore: null })
})
