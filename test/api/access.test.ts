import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { HTTPMethods } from 'fastify'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import type { Api } from '../../server/api/api.ts'
import { hashOf, newToken } from '../../server/api/access.ts'
import { saving, type Service, startService } from './service.ts'

const DAY = '2026-10-17'
const ID = '00000000-0000-4000-8000-000000000001'

let service: Service
let app: Api
let webDir: string
let share: string
beforeAll(async () => {
  webDir = mkdtempSync(join(tmpdir(), 'stagewatt-web-'))
  mkdirSync(join(webDir, 'assets'))
  for (const name of ['index.html', 'share.html', 'assets/main-D4f8Jk2q.js']) writeFileSync(join(webDir, name), name)
  service = await startService()
  app = await service.another({ webDir })
  await service.ask(saving('race', 'plateau'))
  share = await newShare('Escort')
})
afterAll(async () => {
  await service.close()
  rmSync(webDir, { recursive: true, force: true })
})

const json = (method: HTTPMethods, url: string, body: object) => ({
  method,
  url,
  headers: { 'content-type': 'application/json' },
  payload: JSON.stringify(body),
})

const sharesUrl = `/api/v1/races/plateau/days/${DAY}/shares`

async function newShare(name: string): Promise<string> {
  const answer = await service.ask(json('POST', sharesUrl, { name }))
  expect(answer.statusCode).toBe(201)
  return String(answer.json().url).split('#')[1]
}

/** Open to everybody: the client, whether the service is up, and the door itself. */
const OPEN = ['GET /*', 'GET /share', 'GET /api/health', 'GET /api/ready', 'POST /api/v1/sessions']
/** What a share link opens. */
const SHARED = ['GET /api/v1/share/budget', 'GET /api/v1/share/events']
/** An answer that does not end; streams.test.ts asks them. */
const STREAMS = ['GET /api/v1/races/:id/days/:date/events', 'GET /api/v1/races/:id/events', 'GET /api/v1/share/events']

interface Route {
  method: HTTPMethods
  /** With its parameters, as the service knows it. */
  pattern: string
  /** With values in their places. */
  url: string
}

/** Every route of the service, as it prints them itself. */
function routes(): Route[] {
  const above: string[] = []
  const found: Route[] = []
  for (const line of app.printRoutes({ commonPrefix: false }).split('\n')) {
    const parts = /^([│ ]*)[├└]── (\S+) \(([A-Z, ]+)\)$/.exec(line)
    if (parts === null) {
      if (line.trim() !== '') throw new Error(`a route that this test does not understand: ${line}`)
      continue
    }
    const depth = parts[1].length / 4
    above.splice(depth, above.length, parts[2])
    const path = above.join('')
    const pattern = path.startsWith('/') ? path : `/${path}`
    const url = pattern
      .replace(':date', DAY)
      .replace(/:(?:reading|share)\b/, ID)
      .replace('/forecasts/:id', `/forecasts/${ID}`)
      .replace(':id', 'plateau')
      .replace(':kind', 'car')
      .replace('*', 'index.html')
    for (const method of parts[3].split(', ')) found.push({ method, pattern, url })
  }
  return found
}

const nameOf = ({ method, pattern }: Route): string => `${method === 'HEAD' ? 'GET' : method} ${pattern}`

const asked = async ({ method, url }: Route, authorization: string | undefined) => {
  const answer = await app.inject({ method, url, headers: { authorization } })
  const code = answer.body.startsWith('{') ? String(answer.json().code) : ''
  return { status: answer.statusCode, code, headers: answer.headers }
}

describe('every route that there is', () => {
  test('is known to this test, which would miss none', () => {
    const all = routes()
    const paths = Object.keys(app.swagger().paths ?? {})
    const printed = new Set(all.map(({ pattern }) => pattern))
    for (const path of paths) expect(printed).toContain(path.replaceAll(/\{(\w+)\}/g, ':$1'))
    expect(all.length).toBeGreaterThan(60)
    for (const name of [...OPEN, ...SHARED, ...STREAMS]) expect(all.map(nameOf)).toContain(name)
  })

  test('refuses whoever brings no link, but for those that are open to all', async () => {
    for (const route of routes()) {
      const { status, code, headers } = await asked(route, undefined)
      if (OPEN.includes(nameOf(route))) {
        expect([200, 415], nameOf(route)).toContain(status)
        continue
      }
      expect([nameOf(route), status]).toEqual([nameOf(route), 401])
      expect(headers['www-authenticate']).toContain('Bearer')
      if (route.method !== 'HEAD') expect(code).toBe('not-signed-in')
    }
  })

  test('refuses a share link, but for what it opens', async () => {
    for (const route of routes().filter((one) => !OPEN.includes(nameOf(one)) && !STREAMS.includes(nameOf(one)))) {
      const { status, code } = await asked(route, `Bearer ${share}`)
      const isShared = SHARED.includes(nameOf(route))
      expect([nameOf(route), status]).toEqual([nameOf(route), isShared ? 404 : 403])
      if (route.method !== 'HEAD') expect(code).toBe(isShared ? 'nothing-followed' : 'not-shared')
    }
    const stream = { method: 'GET' as const, pattern: '', url: `/api/v1/races/plateau/days/${DAY}/events` }
    expect(await asked(stream, `Bearer ${share}`)).toMatchObject({ status: 403, code: 'not-shared' })
  })

  test('answers the owner', async () => {
    for (const route of routes().filter((one) => !STREAMS.includes(nameOf(one)))) {
      const { status } = await asked(route, `Bearer ${service.token}`)
      expect([401, 403], nameOf(route)).not.toContain(status)
      expect(status, nameOf(route)).toBeLessThan(500)
    }
  })
})

describe('an address that is not there', () => {
  test('is told to the owner alone under /api', async () => {
    expect((await app.inject({ url: '/api/v1/nope', headers: { authorization: undefined } })).statusCode).toBe(401)
    expect((await app.inject({ url: '/api', headers: { authorization: undefined } })).statusCode).toBe(401)
    expect((await app.inject('/api/v1/nope')).statusCode).toBe(404)
    expect((await app.inject({ url: '/nope', headers: { authorization: undefined } })).statusCode).toBe(404)
  })
})

describe('a link', () => {
  const signIn = (token: string) => service.ask(json('POST', '/api/v1/sessions', { token }))

  test('is exchanged for a cookie that no script and no other site reads', async () => {
    const answer = await signIn(service.token)
    expect(answer.json()).toMatchObject({ kind: 'owner', role: 'planner', raceId: null })
    const cookie = String(answer.headers['set-cookie'])
    expect(cookie).toMatch(/^stagewatt=[\w-]{43}; Path=\/; Max-Age=\d+; HttpOnly; SameSite=Strict$/)
    expect(cookie).not.toContain(service.token)
    const headers = { cookie: `theme=dark; ${cookie.split(';')[0]}` }
    expect((await service.ask({ url: '/api/v1/cars', headers })).statusCode).toBe(200)
    const out = await service.ask({ method: 'DELETE', url: '/api/v1/sessions', headers })
    expect(out.statusCode).toBe(204)
    expect(out.headers['set-cookie']).toContain('stagewatt=; Path=/; Max-Age=0')
    expect((await service.ask({ url: '/api/v1/cars', headers })).statusCode).toBe(401)
  })

  test('over https gives a cookie for https alone', async () => {
    const https = await service.another({ publicOrigin: 'https://crew.example' })
    const answer = await https.inject({
      ...json('POST', '/api/v1/sessions', { token: service.token }),
      headers: { 'content-type': 'application/json', host: 'crew.example' },
    })
    expect(String(answer.headers['set-cookie'])).toMatch(/; Secure$/)
  })

  test('that nobody made is refused, and so is a cookie', async () => {
    expect((await signIn('made-up')).json()).toMatchObject({ status: 401, code: 'not-signed-in' })
    expect((await signIn('')).json()).toMatchObject({ status: 422, errors: [{ field: 'token' }] })
    for (const headers of [
      { authorization: 'Bearer made-up' },
      { authorization: `Basic ${service.token}` },
      { cookie: 'stagewatt=made-up' },
      { cookie: `stagewatt=${service.token}` },
    ])
      expect((await service.ask({ url: '/api/v1/cars', headers })).statusCode).toBe(401)
  })

  test('of a share, exchanged, opens its day and nothing else', async () => {
    const answer = await signIn(share)
    expect(answer.json()).toMatchObject({ kind: 'share', raceId: 'plateau', date: DAY, name: 'Escort' })
    const cookie = String(answer.headers['set-cookie'])
    expect(cookie).toContain('Path=/api/v1/share;')
    const headers = { cookie: cookie.split(';')[0] }
    expect((await service.ask({ url: '/api/v1/share/budget', headers })).json().code).toBe('nothing-followed')
    expect((await service.ask({ url: '/api/v1/cars', headers })).statusCode).toBe(401)
    const secret = headers.cookie.split('=')[1]
    expect((await service.ask({ url: '/api/v1/cars', headers: { cookie: `stagewatt=${secret}` } })).statusCode).toBe(
      403,
    )
  })

  test('that was revoked is refused by name, with the cookie it was exchanged for', async () => {
    const token = await newShare('Press')
    const headers = { cookie: String((await signIn(token)).headers['set-cookie']).split(';')[0] }
    const { items } = (await service.ask({ url: sharesUrl })).json()
    expect(items[0]).toMatchObject({ name: 'Press', isRevoked: false })
    expect(JSON.stringify(items)).not.toContain(token)
    const gone = await service.ask({ method: 'DELETE', url: `${sharesUrl}/${items[0].id}` })
    expect(gone.statusCode).toBe(204)
    const authorization = `Bearer ${token}`
    const refused = (await service.ask({ url: '/api/v1/share/budget', headers: { authorization } })).json()
    expect(refused).toMatchObject({ status: 401, code: 'link-revoked' })
    expect((await service.ask({ url: '/api/v1/share/budget', headers })).statusCode).toBe(401)
    expect((await signIn(token)).json()).toMatchObject({ status: 401, code: 'link-revoked' })
    expect((await service.ask({ url: sharesUrl })).json().items[0]).toMatchObject({ isRevoked: true })
    const lost = await service.ask({ method: 'DELETE', url: `${sharesUrl}/${ID}` })
    expect(lost.json()).toMatchObject({ status: 404, code: 'no-such-share' })
  })

  test('of a share stands under the address that people use', async () => {
    const here = await service.ask({
      ...json('POST', sharesUrl, { name: 'Here' }),
      headers: { 'content-type': 'application/json', host: 'localhost:8440' },
    })
    expect(here.json().url).toMatch(/^http:\/\/localhost:8440\/share#[\w-]{43}$/)
    const public_ = await service.another({ publicOrigin: 'https://crew.example' })
    const there = await public_.inject(json('POST', sharesUrl, { name: 'There' }))
    expect(there.json().url).toMatch(/^https:\/\/crew\.example\/share#/)
  })

  test('of the owner, lost and made anew, lets nobody in by the old one', async () => {
    const other = await startService()
    const cookie = String(
      (await other.ask(json('POST', '/api/v1/sessions', { token: other.token }))).headers['set-cookie'],
    ).split(';')[0]
    const token = newToken()
    await other.store.links.replaceOwner(hashOf(token))
    const status = async (headers: Record<string, string>) =>
      (await other.ask({ url: '/api/v1/cars', headers })).statusCode
    expect(await status({ authorization: `Bearer ${token}` })).toBe(200)
    expect(await status({ authorization: `Bearer ${other.token}` })).toBe(401)
    expect(await status({ cookie })).toBe(401)
    await other.close()
  })
})
