import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { ifVersion, saving, type Service, startService } from './service.ts'

const URL = '/api/v1/races/plateau/documents?car=weaver-2&sky=friday'

let service: Service
beforeAll(async () => {
  service = await startService()
  for (const [kind, id] of [
    ['car', 'weaver-2'],
    ['route', 'saltpan-twin-wells'],
    ['sky', 'friday'],
    ['race', 'plateau'],
  ])
    await service.ask(saving(kind, id))
})
afterAll(() => service.close())

const read = async (url: string) => (await service.ask({ url })).json().document

describe('the documents of a race in one answer', () => {
  test('are those that are stored, and a plan of them is the plan of their names', async () => {
    const answer = await service.ask({ url: URL })
    expect(answer.statusCode).toBe(200)
    const documents = answer.json()
    expect(documents).toEqual({
      car: await read('/api/v1/cars/weaver-2'),
      race: await read('/api/v1/races/plateau'),
      routes: { 'saltpan-twin-wells': await read('/api/v1/routes/saltpan-twin-wells') },
      sky: await read('/api/v1/skies/friday'),
    })
    const variants = [{ name: 'A tenth less sun', change: { sunPct: 90 } }]
    const ask = async (of: object) => {
      const payload = JSON.stringify({ ...of, date: '2026-10-17', variants })
      const headers = { 'content-type': 'application/json' }
      return (await service.ask({ method: 'POST', url: '/api/v1/what-if', headers, payload })).body
    }
    const names = { car: { id: 'weaver-2' }, race: { id: 'plateau' }, sky: { id: 'friday' } }
    expect(await ask(documents)).toBe(await ask(names))
  })

  test('are not sent again until one of them is saved', async () => {
    const { etag } = (await service.ask({ url: URL })).headers
    const again = () => service.ask({ url: URL, headers: { 'if-none-match': `W/${String(etag)}` } })
    expect((await again()).statusCode).toBe(304)
    const route = await read('/api/v1/routes/saltpan-twin-wells')
    const save = saving('route', 'saltpan-twin-wells', { ...route, name: 'Saltpan to Twin Wells, mended' })
    expect((await service.ask(ifVersion(save, 1))).statusCode).toBe(200)
    const changed = await again()
    expect(changed.statusCode).toBe(200)
    expect(changed.headers.etag).not.toBe(etag)
    expect(changed.json().routes['saltpan-twin-wells'].name).toBe('Saltpan to Twin Wells, mended')
  })

  test.each([
    ['/api/v1/races/nowhere/documents?car=weaver-2&sky=friday', 404, 'no-such-document'],
    ['/api/v1/races/plateau/documents?car=nobody&sky=friday', 422, 'missing-document'],
    ['/api/v1/races/plateau/documents?car=weaver-2', 400, 'bad-query'],
  ])('%s is answered %i', async (url, status, code) => {
    expect((await service.ask({ url })).json()).toMatchObject({ status, code })
  })

  test('carry what the readings show', async () => {
    const reading = { inputV: 44, inputA: 5, outputV: 112, outputA: 1.86 }
    const payload = { id: '0b0f4c9e-5a52-4c1e-8a55-6d1c1c3f0a12', tracker: 'tail tracker', ...reading }
    const { etag } = (await service.ask({ url: URL })).headers
    const sent = await service.ask({
      method: 'POST',
      url: '/api/v1/races/plateau/readings?car=weaver-2',
      headers: { 'content-type': 'application/json' },
      payload: JSON.stringify({ ...payload, at: '2026-10-17T10:40:00+02:00' }),
    })
    expect(sent.statusCode).toBe(201)
    const answer = await service.ask({ url: URL, headers: { 'if-none-match': String(etag) } })
    expect(answer.statusCode).toBe(200)
    expect(Object.keys(answer.json().learned)).toEqual(['tail tracker'])
  })
})
