import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, test } from 'vitest'
import { loadDemo } from '../../server/api/demo-load.ts'
import { carExample } from '../../server/api/examples/car.ts'
import { projectPath, saving, type Service, startService } from './service.ts'

let service: Service
let folder: string
let warnings: string[]
beforeEach(async () => {
  service = await startService()
  folder = mkdtempSync(join(tmpdir(), 'stagewatt-demo-'))
  warnings = []
})
afterEach(async () => {
  await service.close()
  rmSync(folder, { recursive: true, force: true })
})

const load = (from = folder) => loadDemo(service.app, service.store, from, (line) => warnings.push(line))

const CSV = 'lat,lon\n-23.10,16.22\n-23.09,16.23\n'

function offer(manifest: unknown): void {
  writeFileSync(join(folder, 'demo.json'), JSON.stringify(manifest))
  writeFileSync(join(folder, 'car.json'), JSON.stringify(carExample))
  writeFileSync(join(folder, 'road.csv'), CSV)
}

const CAR = { kind: 'car', id: 'weaver-2', file: 'car.json', contentType: 'application/json' }
const ROAD = { kind: 'route', id: 'road', file: 'road.csv', contentType: 'text/csv', query: { name: 'Saltpan loop' } }

describe('the demo', () => {
  test('is loaded on an empty store and never again, not even when it was taken away', async () => {
    offer([CAR, ROAD])
    expect(await load()).toBe(2)
    expect((await service.ask({ url: '/api/v1/routes/road' })).json().name).toBe('Saltpan loop')
    expect(await load()).toBe(0)
    await service.ask({ method: 'DELETE', url: '/api/v1/cars/weaver-2', headers: { 'if-match': '"1"' } })
    await service.ask({ method: 'DELETE', url: '/api/v1/routes/road', headers: { 'if-match': '"1"' } })
    expect(await load()).toBe(0)
    expect(warnings).toEqual([])
  })

  test('is not loaded beside documents of the crew', async () => {
    offer([ROAD])
    await service.ask(saving('car', 'our-car'))
    expect(await load()).toBe(0)
    expect((await service.ask({ url: '/api/v1/routes' })).json().items).toEqual([])
  })

  test.each([
    ['a manifest of another shape', [{ ...CAR, kind: 'boat' }], '[0].kind'],
    ['a path out of its folder', [{ ...CAR, file: '../car.json' }], '[0].file'],
    ['a file that is not there', [{ ...CAR, file: 'lost.json' }], 'lost.json'],
    ['a file that is refused', [{ ...ROAD, file: 'car.json' }], 'car.json was answered 422'],
  ])('with %s is said and stops nothing', async (_, manifest, expected) => {
    offer(manifest)
    expect(await load()).toBe(0)
    expect(warnings).toHaveLength(1)
    expect(warnings[0]).toContain('The demo race could not be loaded')
    expect(warnings[0]).toContain(expected)
    expect((await service.ask({ url: '/api/health' })).statusCode).toBe(200)
  })

  test('that comes with the service loads whole and gives a budget for every day', async () => {
    const saved = await load(projectPath('server/demo'))
    expect(warnings).toEqual([])
    expect(saved).toBeGreaterThan(3)
    const [race] = (await service.ask({ url: '/api/v1/races' })).json().items
    const [car] = (await service.ask({ url: '/api/v1/cars' })).json().items
    const [sky] = (await service.ask({ url: '/api/v1/skies' })).json().items
    const answer = await service.ask({
      method: 'POST',
      url: `/api/v1/races/${race.id}/forecasts`,
      headers: { 'content-type': 'application/json' },
      payload: JSON.stringify({ carId: car.id, skyId: sky.id, speeds: { kind: 'meet-target' } }),
    })
    expect(answer.statusCode).toBe(201)
    const { items } = (await service.ask({ url: `/api/v1/races/${race.id}/days` })).json()
    const { days } = answer.json().budget
    expect(days.map((day: { date: string }) => day.date)).toEqual(items.map((day: { date: string }) => day.date))
  })
})
