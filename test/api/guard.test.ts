import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import type { Api } from '../../server/api/api.ts'
import { saving, type Service, startService } from './service.ts'

let service: Service
let number = 0
beforeAll(async () => {
  service = await startService()
})
afterAll(() => service.close())

async function put(app: Api, headers: Record<string, string>): Promise<string> {
  const request = saving('car', `car-${++number}`)
  const answer = await app.inject({ ...request, headers: { ...request.headers, ...headers } })
  return answer.statusCode === 201 ? 'saved' : String(answer.json().code)
}

describe('a service that only this machine reaches', () => {
  test.each([
    ['127.0.0.1:8440', 'saved'],
    ['localhost:8440', 'saved'],
    ['[::1]:8440', 'saved'],
    ['127.0.0.1.attacker.example:8440', 'other-host'],
    ['attacker.example', 'other-host'],
    ['localhost.attacker.example', 'other-host'],
  ])('asked as %s answers a change: %s', async (host, expected) => {
    expect(await put(service.app, { host })).toBe(expected)
  })

  test('is changed under its public name too', async () => {
    const app = await service.another({ publicOrigin: 'https://crew.example' })
    expect(await put(app, { host: 'crew.example' })).toBe('saved')
    expect(await put(app, { host: 'crew.example', origin: 'https://crew.example' })).toBe('saved')
    expect(await put(app, { host: 'other.example' })).toBe('other-host')
  })

  test('is read under any name', async () => {
    expect((await service.app.inject({ url: '/api/v1/cars', headers: { host: 'a.example' } })).statusCode).toBe(200)
  })
})

describe('a page', () => {
  test.each([
    ['http://localhost:8440', 'saved'],
    ['http://localhost:3000', 'other-origin'],
    ['https://attacker.example', 'other-origin'],
    ['null', 'other-origin'],
  ])('of %s that changes something: %s', async (origin, expected) => {
    expect(await put(service.app, { host: 'localhost:8440', origin })).toBe(expected)
  })

  test('of another site changes nothing by POST or DELETE either', async () => {
    const headers = { host: 'localhost', origin: 'https://attacker.example' }
    for (const [method, url] of [
      ['POST', '/api/v1/forecast'],
      ['DELETE', '/api/v1/cars/x'],
    ] as const)
      expect((await service.app.inject({ method, url, headers })).json().code).toBe('other-origin')
  })
})

test('a service for the whole network takes any host, but no foreign page', async () => {
  const app = await service.another({ host: '0.0.0.0' })
  expect(await put(app, { host: '192.168.4.20:8440' })).toBe('saved')
  expect(await put(app, { host: '192.168.4.20:8440', origin: 'http://192.168.4.20:8440' })).toBe('saved')
  expect(await put(app, { host: '192.168.4.20:8440', origin: 'https://attacker.example' })).toBe('other-origin')
})
